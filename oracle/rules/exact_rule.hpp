// The rule exact: the response of the declared arithmetic.
#pragma once

#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// The response equals what the declared arithmetic returns, bit for bit.
struct ExactRule {
    static constexpr bool is_exact = true, ends_early = false;
};

const Recipe& exact_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<ExactRule> make_exact_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
