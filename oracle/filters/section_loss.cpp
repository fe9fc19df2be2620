#include "oracle/filters/section_loss.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/exact_sums.hpp"
#include "oracle/filters/stability.hpp"

namespace halflsb {

namespace {

double half_ulp(double value) {
    const double size = std::fabs(value);
    return size == 0.0 ? 0.0 : std::ldexp(1.0, std::ilogb(size) - 53);
}

// |A|^2 = (1 - a2)^2 + a1^2 + 2 a1 (1 + a2) c + 4 a2 c^2 with c = cos w: smallest inside -1 .. 1 at
// c = -a1 (1 + a2) / (4 a2), where |A| = (1 - a2) sqrt(1 - a1^2 / (4 a2)), else at an end.
double least_size(const BiquadSection& s) {
    const double ends = std::min(std::fabs(sum_of_three(1.0, s.a1, s.a2)), std::fabs(sum_of_three(1.0, -s.a1, s.a2)));
    if (!(s.a2 > 0.0) || std::fabs(s.a1) * (1.0 + s.a2) >= 4.0 * s.a2) return ends;
    const double square = difference_of_product(4.0 * s.a2, s.a1, s.a1) / (4.0 * s.a2);
    return std::min(ends, (1.0 - s.a2) * std::sqrt(std::max(square, 0.0)));
}

}  // namespace

double loss_of(const std::vector<BiquadSection>& sections) {
    double loss = 0.0;
    for (const BiquadSection& s : sections) {
        const double least = least_size(s);
        if (!is_stable(s) || !(least > 0.0)) return no_limit;
        loss += (half_ulp(s.a1) + half_ulp(s.a2)) / least;
    }
    return loss;
}

}  // namespace halflsb
