// The rule unchanged: the response of an accepted run.
#pragma once

#include <memory>
#include <optional>
#include <string>

#include "oracle/rules/accepted_response.hpp"
#include "oracle/rules/limit.hpp"
#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// The response equals that of an accepted run, bit for bit or within a limit; needs no oracle.
struct UnchangedRule {
    static constexpr bool is_exact = true, ends_early = false, needs_no_oracle = true;
    std::string baseline;                              ///< folder below the root
    std::optional<Limit> largest;                      ///< none: bit for bit
    std::shared_ptr<const AcceptedResponse> accepted;  ///< of the case; nullptr: the baseline has none
    std::string missing;                               ///< then: why, and what to do
};

const Recipe& unchanged_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<UnchangedRule> make_unchanged_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
