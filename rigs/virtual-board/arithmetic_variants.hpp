// The filters of rigs/filters with one decision of their arithmetic changed. Without a change they give the same codes
// as rigs/filters: a test holds that.
#pragma once

#include <memory>

#include "rigs/filters/biquad_q15.h"
#include "rigs/filters/biquad_q31.h"
#include "rigs/virtual-board/code_filter.hpp"

namespace halflsb::board {

enum class DroppedBits { half_up, half_away, floor, toward_zero, constant_twice };

struct Deviation {
    DroppedBits rounding = DroppedBits::half_up;
    bool output_wraps = false;          ///< instead of saturating
    bool feedback_unsaturated = false;  ///< biquads: y1 is taken before saturation
    bool products_truncated = false;    ///< each product loses its bits before the sum
    bool narrow_sum = false;            ///< moving average: the sum is as wide as a sample, and wraps
    int shift_more = 0;                 ///< bits dropped too many
    int points_less = 0;                ///< moving average: ring shorter, divisor unchanged
    bool offset_kept = false;           ///< offset binary: the mid-code is not subtracted
    bool offset_missing = false;        ///< offset binary: the mid-code is not added to the output

    bool any() const;
};

std::unique_ptr<CodeFilter> average_variant(int points, int word_bits, const Deviation& deviation);
/// Codes in offset binary; bits above word_bits are not looked at.
std::unique_ptr<CodeFilter> offset_average_variant(int points, int word_bits, const Deviation& deviation);
/// `taps` must outlive the filter, and may change between samples.
std::unique_ptr<CodeFilter> fir_variant(const std::int16_t* taps, int count, const Deviation& deviation);
std::unique_ptr<CodeFilter> biquad_variant(const biquad_q15_coefficients* sections, int count,
                                           const Deviation& deviation);
std::unique_ptr<CodeFilter> biquad_variant(const biquad_q31_coefficients* sections, int count,
                                           const Deviation& deviation);

}  // namespace halflsb::board
