// What becomes of a value beyond the ends of the words it shall go into.
#pragma once

#include <span>

#include "oracle/filters/stage_arithmetic.hpp"

namespace halflsb {

class WordEnds {
public:
    WordEnds(const SampleFormat& format, Overflow overflow);

    /// Saturating: clamped to lowest_value .. highest_value. Wrapping: moved by whole multiples of the range into
    /// -full scale .. full scale, the upper end left out; a value between the top code and full scale stays, as a
    /// floor would have it. f32 saturates always. NaN stays, and an infinity that wraps becomes one.
    void apply(std::span<double> values) const;

private:
    double lowest_, highest_, range_;
    bool wraps_;
};

}  // namespace halflsb
