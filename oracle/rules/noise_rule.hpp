// The rule noise: how much of white noise comes through, and how much the board adds.
#pragma once

#include <optional>

#include "oracle/rules/limit.hpp"
#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// A limit of a power ratio, as the plan wrote it.
struct GainLimit {
    double number = 0.0;
    bool is_db = false;  ///< 10 lg of the ratio, or the ratio itself
    bool operator==(const GainLimit&) const = default;
};

/// At least one limit is set.
struct NoiseRule {
    static constexpr bool is_exact = false, ends_early = false;
    std::optional<GainLimit> least_gain, largest_gain;  ///< of output over input power
    std::optional<Limit> excess;                        ///< rms of response minus design, mean removed; not derived
    bool relative_to_design = false;                    ///< the gains are those of the filter, or over the design's
    double delta_db = 0.1;                              ///< zone of indifference beyond each limit, of powers
};

const Recipe& noise_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<NoiseRule> make_noise_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
