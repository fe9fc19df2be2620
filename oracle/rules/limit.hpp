// A limit on the size of an error, in one of three units, or derived.
#pragma once

#include <optional>
#include <string_view>

#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// As the plan wrote it. `in` decides what one unit is worth as a value of the signal.
struct Limit {
    enum class In { lsb, full_scale_ratio, unit };
    double number = 0.0;
    In in = In::lsb;
    bool is_derived = false;  ///< from the declared arithmetic, for the case and the channel; there is no number then
    bool operator==(const Limit&) const = default;
};

/// The words of one limit, a word a unit: max_lsb, max_ratio, max_unit.
struct LimitWords {
    std::string_view lsb, ratio, unit;
    bool is_rate = false;  ///< of a change in time, to which full scale sets no end
};
inline constexpr LimitWords largest_words{"max_lsb", "max_ratio", "max_unit"};

/// A number that is not negative.
Parameter limit_word(std::string_view name, std::string_view unit, std::string_view help);
/// Or "derived".
Parameter derivable_word(std::string_view name, std::string_view unit, std::string_view help);

/// One limit in one of its three units; the widest sensible one is full scale. nullopt when none is given.
Outcome<std::optional<Limit>> read_limit(const ParameterValues& values, const Recipe& recipe, const LimitWords& words,
                                         const RuleContext& context);

}  // namespace halflsb
