// The rule crosstalk: what a channel returns that is not driven, while another one is.
//
// The largest response is held against what zeros give there. The coupling is the amplitude with which the driven
// channel comes through (oracle/measure/coupling.hpp): its stimulus as it was sent, through the filter of the idle
// channel, or through its own.
#pragma once

#include <cstdint>
#include <memory>
#include <vector>

#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

/// Fewest judged samples that a coupling is measured over: 64 for each batch in time.
inline constexpr std::int64_t coupling_least_samples = 2048;

WantedReferences wanted_by(const CrosstalkRule& rule, bool is_driven);
/// Nothing of the channel that is driven.
std::unique_ptr<RuleJudge> make_judge(const CrosstalkRule& rule, const Rule& asked, const JudgedChannel& channel);
/// One channel of several must be driven alone; for a coupling its stimulus must have power all the time.
void check(const CrosstalkRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
