// The rule error: response minus declared reference.
#pragma once

#include <optional>

#include "oracle/rules/limit.hpp"
#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// Response minus declared reference. At least one limit is set.
struct ErrorRule {
    static constexpr bool is_exact = true, ends_early = false;
    std::optional<Limit> largest, rms, bias;  ///< not negative; bias limits |mean|
    std::optional<double> min_snr_db;
};

const Recipe& error_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<ErrorRule> make_error_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
