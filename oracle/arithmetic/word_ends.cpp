#include "oracle/arithmetic/word_ends.hpp"

#include <algorithm>
#include <cmath>

namespace halflsb {

WordEnds::WordEnds(const SampleFormat& format, Overflow overflow)
    : lowest_(lowest_value(format)),
      highest_(highest_value(format)),
      range_(2.0 * full_scale_value(format)),
      wraps_(overflow == Overflow::wrap && format.has_lsb()) {}

void WordEnds::apply(std::span<double> values) const {
    if (wraps_) {
        // remainder is exact; it takes the even multiple at the ends, so the upper one is put right.
        const double full_scale = 0.5 * range_;
        for (double& value : values) {
            if (value >= -full_scale && value < full_scale) continue;
            value = std::remainder(value, range_);
            if (value == full_scale) value = -full_scale;
        }
    } else {
        // NaN compares false with both ends and stays NaN, as it must: nothing may hide it.
        for (double& value : values) value = std::clamp(value, lowest_, highest_);
    }
}

}  // namespace halflsb
