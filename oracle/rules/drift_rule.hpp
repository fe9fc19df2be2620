// The rule drift: the slope of the error over a long run.
#pragma once

#include <optional>

#include "oracle/rules/limit.hpp"
#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// Response minus declared reference, fitted by a line. At least one limit is set.
struct DriftRule {
    static constexpr bool is_exact = false, ends_early = false;
    std::optional<Limit> slope;   ///< of its size, per hour
    std::optional<Limit> change;  ///< of its size, from the first sample to the last
};

const Recipe& drift_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<DriftRule> make_drift_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
