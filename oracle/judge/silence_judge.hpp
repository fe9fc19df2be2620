// What remains once the stimulus has ended.
#pragma once

#include <memory>
#include <vector>

#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

/// Fewest samples of silence behind the design's tail: the last half of them must show a cycle twice to be told.
inline constexpr std::int64_t silence_least_samples = 64;

WantedReferences wanted_by(const SilenceRule& rule, bool is_driven);
/// A channel that is not driven is judged over the same stretch: nothing should remain there either.
std::unique_ptr<RuleJudge> make_judge(const SilenceRule& rule, const Rule& asked, const JudgedChannel& channel);
void check(const SilenceRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
