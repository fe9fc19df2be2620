// The filters of rigs/filters with their tables and state, each as a row of functions that the board can offer and that
// faults can be put around. They are parameters of the CW-7 checkweigher and a few plain averages.
#pragma once

#include <cstdint>
#include <functional>
#include <limits>
#include <memory>
#include <string>
#include <vector>

#include "rigs/kit/halflsb_kit.h"
#include "rigs/virtual-board/arithmetic_variants.hpp"
#include "rigs/virtual-board/sample_words.hpp"

namespace halflsb::board {

enum class FilterKind {
    average,
    adjustable_average,
    symmetric_fir,
    asymmetric_fir,
    biquad_q15,
    biquad_q31,
    biquad_f32,
    one_pole,
    dc_blocker,
    comb,
    channels,  ///< several, each with a filter of its own
    decision,  ///< of clean_decisions.hpp
    rate,      ///< of clean_rates.hpp
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
    std::string what = {};  ///< for people: what it computes, and how it rounds
    FilterKind kind = FilterKind::average;
    Format format = HALFLSB_Q15;  ///< in and out
    std::uint8_t tables = 0;
    std::function<void()> reset, reset_half;
    std::function<void(const void* in, void* out, std::uint16_t count)> process;
    /// In the place of `process` where the rate changes: of `down` samples come `up`. One channel, no variant.
    std::function<std::uint16_t(const void* in, void* out, std::uint16_t count)> process_rate = {};
    std::uint16_t up = 1, down = 1;
    std::function<bool(std::uint8_t table, std::uint16_t offset, const std::int32_t* values, std::uint8_t count)> load;
    /// The same filter with a change of its arithmetic; reads the same tables. Empty for float.
    std::function<std::unique_ptr<CodeFilter>(const Deviation&)> variant;
    /// Of a filter of several channels that of each, in order: they share their state with the functions above, which
    /// act on all (but for reset_half and variant, which are empty).
    std::vector<FilterParts> channels = {};
    bool channels_alike = false;

    std::size_t channel_count() const { return channels.empty() ? 1 : channels.size(); }
};

/// Window of the filter "average", which the setting "average-points" changes.
inline constexpr std::int32_t average_points_most = 256;
struct AverageSetting {
    std::int32_t points = 16;
    std::function<void()> changed;
};

/// In the order in which the board numbers them when it offers all.
std::vector<FilterParts> all_filters(const TableFaults& faults, AverageSetting& setting);

/// What a table's `load` does: false when the values do not fit the table or its words.
template <typename Word>
bool load_words(Word* table, std::size_t size, std::uint16_t offset, const std::int32_t* values, std::uint8_t count) {
    if (std::size_t{offset} + count > size) return false;
    for (int i = 0; i < count; ++i) {
        if (values[i] < std::numeric_limits<Word>::min() || values[i] > std::numeric_limits<Word>::max()) return false;
    }
    for (int i = 0; i < count; ++i) table[offset + i] = static_cast<Word>(values[i]);
    return true;
}

}  // namespace halflsb::board
