// The slope of the error over a long run.
#pragma once

#include <memory>
#include <vector>

#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

/// What roundings to steps of one may feign, or hide, of the change of a fitted line over the run: the largest that
/// errors of -1/2 .. 1/2 can come to, sum |x| / 2 over sum x^2 times the length (oracle/measure/drift.hpp).
inline constexpr double feigned_change_steps = 1.5;

WantedReferences wanted_by(const DriftRule& rule, bool is_driven);
std::unique_ptr<RuleJudge> make_judge(const DriftRule& rule, const Rule& asked, const JudgedChannel& channel);
void check(const DriftRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
