// The rule tone: what comes back of one sine, against limits.
#pragma once

#include <optional>

#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// At least one limit is set. The terms are those of oracle/measure/tone.hpp.
struct ToneRule {
    static constexpr bool is_exact = false, ends_early = false;
    std::optional<double> min_sinad_db, min_enob_bits, max_thd_db, min_sfdr_db;
    int highest_harmonic = 10;
    bool fits_frequency = false;  ///< for a source with a clock of its own
};

const Recipe& tone_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<ToneRule> make_tone_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
