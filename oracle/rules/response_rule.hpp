// The rule response: gain against limits in bands or a mask; phase and group delay.
#pragma once

#include <optional>
#include <vector>

#include "oracle/rules/phase_limits.hpp"
#include "oracle/rules/response_mask.hpp"
#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// Gain in dB between limits over a band, both edges included.
struct ResponseBand {
    double from_hz = 0.0, to_hz = 0.0;
    std::optional<double> min_db, max_db;  ///< at least one
};

struct ResponseRule {
    static constexpr bool is_exact = false, ends_early = true;
    std::vector<ResponseBand> bands;
    double delta_db = 0.1;            ///< zone of indifference beyond each limit
    bool relative_to_design = false;  ///< the bands limit the gain itself, or its deviation from the design
    std::optional<ResponseMask> mask;
    PhaseLimits phase;
};

const Recipe& response_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<ResponseRule> make_response_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
