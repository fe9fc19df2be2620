// The filters of rigs/filters with their tables and state, each as a row of functions that the board can offer and that
// faults can be put around. They are parameters of the CW-7 checkweigher and a few plain averages.
#pragma once

#include <cstdint>
#include <functional>
#include <memory>
#include <string>
#include <vector>

#include "rigs/kit/halflsb_kit.h"
#include "rigs/virtual-board/arithmetic_variants.hpp"

namespace halflsb::board {

enum class FilterKind {
    average,
    adjustable_average,
    symmetric_fir,
    asymmetric_fir,
    biquad_q15,
    biquad_q31,
    biquad_f32
};

/// How the firmware came by its coefficients.
struct TableFaults {
    bool truncated = false;   ///< C03: cast instead of rounded
    bool a1_flipped = false;  ///< C07: the sign of a1 as the design program has it
    bool reversed = false;    ///< C10: taps in the wrong order of time
    bool any() const { return truncated || a1_flipped || reversed; }
};

struct FilterParts {
    std::string name;
    FilterKind kind = FilterKind::average;
    halflsb_format format = HALFLSB_Q15;  ///< in and out
    std::uint8_t tables = 0;
    std::function<void()> reset, reset_half;
    std::function<void(const void* in, void* out, std::uint16_t count)> process;
    std::function<bool(std::uint8_t table, std::uint16_t offset, const std::int32_t* values, std::uint8_t count)> load;
    /// The same filter with a change of its arithmetic; reads the same tables. Empty for float.
    std::function<std::unique_ptr<CodeFilter>(const Deviation&)> variant;
};

/// Window of the filter "average", which the setting "average-points" changes.
inline constexpr std::int32_t average_points_most = 256;
struct AverageSetting {
    std::int32_t points = 16;
    std::function<void()> changed;
};

/// In the order in which the board numbers them when it offers all.
std::vector<FilterParts> all_filters(const TableFaults& faults, AverageSetting& setting);

}  // namespace halflsb::board
