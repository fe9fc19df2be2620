// The rule crosstalk: what the other channels return while one is driven.
#pragma once

#include <optional>

#include "oracle/rules/limit.hpp"
#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

struct CrosstalkRule {
    static constexpr bool is_exact = false, ends_early = false;
    std::optional<Limit> largest;   ///< of an idle channel's response, beyond what zeros give
    std::optional<double> max_db;   ///< of the coupling, an amplitude
};

const Recipe& crosstalk_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<CrosstalkRule> make_crosstalk_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
