// White noise: its power behind the filter over that before it, and what the board adds.
//
// The power is held against that of the design on the same samples, whose gain for white noise is known on paper, sum
// h^2: what both have in common then does not make the figure less sure. Only where no such gain is known (a median, a
// changed rate) it is held against the stimulus itself.
#pragma once

#include <memory>
#include <optional>
#include <vector>

#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

/// sum h^2 of a linear channel of one rate, else none.
std::optional<double> white_noise_gain(const Plan& plan, const Case& the_case, int channel);
/// How many samples of the response a noise rule wants behind the filter's settling: 200 times what the filter
/// remembers, (sum |h|)^2 / sum h^2 (M of a moving average, two time constants of a one-pole), or else its tail.
std::int64_t noise_samples_needed(const Plan& plan, const Case& the_case, int channel);

WantedReferences wanted_by(const NoiseRule& rule, bool is_driven);
std::unique_ptr<RuleJudge> make_judge(const NoiseRule& rule, const Rule& asked, const JudgedChannel& channel);
void check(const NoiseRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
