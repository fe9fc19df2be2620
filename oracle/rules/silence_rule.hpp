// The rule silence: what remains at the output once the input has ended.
#pragma once

#include <optional>

#include "oracle/rules/limit.hpp"
#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

struct SilenceRule {
    static constexpr bool is_exact = true, ends_early = false;
    std::optional<Limit> largest;  ///< always set
};

const Recipe& silence_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<SilenceRule> make_silence_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
