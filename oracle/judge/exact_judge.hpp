// The rule exact: response codes against those of the twin, equal, or how many differ, from where on and by how much.
// Codes of f32 are compared as bits, so that neither a NaN nor a zero of the other sign goes unseen.
#pragma once

#include <memory>
#include <vector>

#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

WantedReferences wanted_by(const ExactRule& rule, bool is_driven);
std::unique_ptr<RuleJudge> make_judge(const ExactRule& rule, const Rule& asked, const JudgedChannel& channel);
/// A twin needs the whole arithmetic, and starts as the board does.
void check(const ExactRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
