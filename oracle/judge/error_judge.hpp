// The rule error: the response against the declared reference, by limits in numbers or derived.
#pragma once

#include <memory>
#include <vector>

#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

WantedReferences wanted_by(const ErrorRule& rule, bool is_driven);
std::unique_ptr<RuleJudge> make_judge(const ErrorRule& rule, const Rule& asked, const JudgedChannel& channel);
/// A derived limit must be a limit: finite, and narrower than full scale.
void check(const ErrorRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
