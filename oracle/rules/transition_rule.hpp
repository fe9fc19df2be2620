// The rule transition: the response to a step, against limits.
#pragma once

#include <optional>

#include "oracle/rules/limit.hpp"
#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// At least one limit is set. The terms are those of oracle/measure/transition.hpp.
struct TransitionRule {
    static constexpr bool is_exact = false, ends_early = false;
    std::optional<double> max_rise_samples, max_fall_samples;  ///< at most one of the two
    std::optional<double> max_overshoot_percent, max_undershoot_percent, max_preshoot_percent;
    std::optional<double> max_settling_samples;
    std::optional<Limit> final_value;  ///< of the distance to the design's
    double low_percent = 10.0, high_percent = 90.0, band_percent = 2.0;
};

const Recipe& transition_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<TransitionRule> make_transition_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
