// The rule latency: whole samples of delay, and what is left of one.
#pragma once

#include <optional>

#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// Whole-sample delay of the response behind the reference, exactly this many.
struct LatencyRule {
    /// Of the whole samples: a limit on their fraction makes it a random figure (is_uncertain, certainty.hpp).
    static constexpr bool is_exact = true, ends_early = true;
    int expected_samples = 0;  ///< within the lag window
    bool implicit = false;     ///< the one each case has without asking
    /// Largest delay beside the whole samples, either way.
    std::optional<double> max_fraction_samples = {};
};

const Recipe& latency_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<LatencyRule> make_latency_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
