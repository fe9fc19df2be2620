#include "oracle/measure/log_histogram.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {
namespace {

constexpr int bins_an_octave = 256;

}  // namespace

std::int64_t nearest_rank(double share, std::int64_t count) {
    // 0.999 of 1000 is a rounding above 999: no rank more for that.
    const double rank = std::ceil(share * static_cast<double>(count) * (1.0 - 1e-12));
    return std::clamp<std::int64_t>(static_cast<std::int64_t>(rank), std::min<std::int64_t>(count, 1), count);
}

void LogHistogram::add(double value) {
    smallest_ = count_ == 0 ? value : std::min(smallest_, value);
    largest_ = count_ == 0 ? value : std::max(largest_, value);
    ++count_;
    if (!(value > 0.0)) {
        ++zeros_;
        return;
    }
    int exponent = 0;
    const double mantissa = std::frexp(value, &exponent);  // 0.5 .. 1
    ++bins_[exponent * bins_an_octave + static_cast<int>((2.0 * mantissa - 1.0) * bins_an_octave)];
}

double LogHistogram::quantile(double share) const {
    const std::int64_t rank = nearest_rank(share, count_);
    if (rank == count_) return largest_;
    if (rank <= 1) return smallest_;
    std::int64_t below = zeros_;
    if (rank <= below) return 0.0;
    for (const auto& bin : bins_) {
        below += bin.second;
        if (rank > below) continue;
        const int octave = static_cast<int>(std::floor(static_cast<double>(bin.first) / bins_an_octave));
        const int place = bin.first - octave * bins_an_octave;
        const double middle = std::ldexp(1.0 + (place + 0.5) / bins_an_octave, octave - 1);
        return std::clamp(middle, smallest_, largest_);
    }
    return largest_;
}

}  // namespace halflsb
