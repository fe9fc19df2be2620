#include "oracle/filters/memory.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/exact_sums.hpp"

namespace halflsb {

namespace {

double sum_of(std::span<const double> values) {
    double sum = 0.0;
    for (const double value : values) sum += std::fabs(value);
    return sum;
}

// At least the sum over n of |g[n]|, g the impulse response of 1 / (1 + a1 z^-1 + a2 z^-2). Each 1 - radius is taken
// from A(1) or A(-1), where nothing cancels.
double recursion_norm(double a1, double a2) {
    const double size = std::fabs(a1);
    const double imaginary = difference_of_product(4.0 * a2, a1, a1);  // the square of 2 r sin theta
    if (imaginary > 0.0) {
        const double radius = std::sqrt(a2), sine = std::sqrt(imaginary) / (2.0 * radius);
        const double gap = (1.0 - a2) / (1.0 + radius);
        return std::min(1.0 / (gap * gap), 1.0 / (gap * sine));
    }
    const double near = 0.5 * (size + std::sqrt(-imaginary));  // the pole of larger radius
    const double far = near > 0.0 ? a2 / near : 0.0;           // negative where it lies on the other side
    const double near_gap = sum_of_three(1.0, -size, a2) / (1.0 - far);
    const double far_gap = far >= 0.0 ? 1.0 - far : sum_of_three(1.0, size, a2) / (1.0 + near);
    return 1.0 / (near_gap * far_gap);
}

}  // namespace

Memory memory_of(const MovingAverage& design) { return {1.0, 1.0, 0.0, static_cast<std::size_t>(design.points - 1)}; }

Memory memory_of(const Fir& design) {
    const double norm = sum_of(design.taps);
    return {norm, norm, 0.0, design.taps.empty() ? 0 : design.taps.size() - 1};
}

Memory memory_of(const BiquadSection& s) {
    if (s.a1 == 0.0 && s.a2 == 0.0) {
        return {std::fabs(s.b0) + std::fabs(s.b1) + std::fabs(s.b2), std::fabs(s.b1) + std::fabs(s.b2), 0.0, 2};
    }
    const double norm = recursion_norm(s.a1, s.a2);
    return {norm * (std::fabs(s.b0) + std::fabs(s.b1) + std::fabs(s.b2)), norm * (std::fabs(s.b1) + std::fabs(s.b2)),
            norm * (std::fabs(s.a1) + std::fabs(s.a2)), 2};
}

Memory memory_of(const Comb& design) {
    const double feedback = std::fabs(design.feedback), series = 1.0 / (1.0 - feedback);
    return {series * (std::fabs(design.direct) + std::fabs(design.forward)), series * std::fabs(design.forward),
            series * feedback, static_cast<std::size_t>(design.delay_samples)};
}

double share(double gain, double amount) { return gain == 0.0 || amount == 0.0 ? 0.0 : gain * amount; }

void PastSum::add(std::span<const double> piece) {
    if (samples_ <= piece.size()) {
        value_ = sum_of(piece.last(samples_));
        return;
    }
    ring_.resize((samples_ + piece.size() - 1) / piece.size(), 0.0);
    ring_[place_] = sum_of(piece);
    place_ = place_ + 1 == ring_.size() ? 0 : place_ + 1;
    value_ = sum_of(ring_);
}

}  // namespace halflsb
