// The rule headroom: the stimulus that drives a node the hardest neither wraps nor clips more than was declared.
#pragma once

#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

struct HeadroomRule {
    static constexpr bool is_exact = true, ends_early = false;
    double max_clipped_samples = 0.0, max_wrapped_samples = 0.0;  ///< whole numbers
};

const Recipe& headroom_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<HeadroomRule> make_headroom_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
