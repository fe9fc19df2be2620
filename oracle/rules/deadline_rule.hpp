// The rule deadline: what the filter takes a sample, as the board's own counter tells it.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/rules/rule_words.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// A RESPONSE tells the largest of one sample in 24 bits; this stands for itself and all beyond (docs/wire.md).
inline constexpr std::uint32_t most_ticks_told = 0xFFFFFF;

struct DeadlineRule {
    static constexpr bool is_exact = true, ends_early = false, needs_no_oracle = true;
    std::optional<double> max_ticks;         ///< of any sample
    std::optional<double> max_period_ratio;  ///< of any sample, in sample periods
    std::optional<double> percentile;        ///< of the blocks, in (0, 100]
    std::optional<double> max_percentile_ticks;  ///< of the mean per sample of that block
};

const Recipe& deadline_recipe();
/// An Error's place is the name of the parameter to blame.
Outcome<DeadlineRule> make_deadline_rule(const ParameterValues& values, const RuleContext& context);

}  // namespace halflsb
