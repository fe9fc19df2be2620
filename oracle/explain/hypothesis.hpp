// What a board may be: a filter and its arithmetic, and how codes get to it and back, in five slots. A hypothesis is a
// board with the changes that lead to it from the declared one. Twins know no fault: what is one stands here.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

#include "oracle/explain/code_map.hpp"
#include "oracle/explain/passage.hpp"
#include "oracle/explain/reset.hpp"
#include "oracle/filters/filter.hpp"

namespace halflsb {

/// What no plan can say of a stage's sums.
struct SumChange {
    std::size_t stage = 0;     ///< of the channel's chain, from 0
    int constant_eighths = 0;  ///< of the last place that a sum is shortened to, added to each before
    int divisor = 0;           ///< of a moving average in place of its points; 0: its points
    bool operator==(const SumChange&) const = default;
};

/// Of one channel.
struct BoardDescription {
    FilterChain filter;
    SumChange sum = {};
    CodeMap input = {}, output = {};
    Passage passage = {};
    ResetKind reset = ResetKind::whole;
    int reset_places = 0;  ///< of ResetKind::ring_places
    bool operator==(const BoardDescription&) const = default;
};

enum class Slot { filter, arithmetic, input, output, passage, reset, channels };
std::string_view name_of(Slot slot);

/// One step away from what was declared.
struct Change {
    Slot slot = Slot::arithmetic;
    std::size_t stage = 0;  ///< of the channel's chain, from 0; of filter and arithmetic
    std::string what;       ///< what the board does: "floor in place of half-up"
    std::string look_at;    ///< where in the firmware
    double price_bits = 0.0;
    bool operator==(const Change&) const = default;
};

struct Hypothesis {
    BoardDescription board;
    std::vector<Change> changes;   ///< none: the board as declared
    double open_words_bits = 0.0;  ///< the price of what the plan leaves open and the board says
    double price_bits() const;
    /// "floor in place of half-up; the output that wraps"
    std::string what() const;
    bool operator==(const Hypothesis&) const = default;
};

/// Appends `made` with its change where its board is another than that of `from`. A change of a filter or an arithmetic
/// names its stage where there are several.
void add_changed(const Hypothesis& from, Hypothesis made, Change change, std::vector<Hypothesis>& all);

}  // namespace halflsb
