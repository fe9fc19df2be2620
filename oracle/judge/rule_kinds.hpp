// What the judge does for each kind of rule, chosen by the kind.
//
// A kind brings three functions: what it wants to see beside the declared reference, its judge on one channel, and
// what a case must be to be judged by it. A new kind that lacks one of them does not compile.
#pragma once

#include <memory>
#include <vector>

#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

/// What the rules of the case want of a channel, counted from 1.
WantedReferences wanted_references(const Case& the_case, int channel);
/// nullptr where the rule says nothing of the channel, and for what is not judged sample by sample at a known lag: the
/// latency itself (channel_judge.hpp), `unchanged` and `deadline`, which look at all channels (unchanged_judge.hpp,
/// deadline_judge.hpp), and what compares two captures (companion_judge.hpp). The rule must outlive its judge.
std::unique_ptr<RuleJudge> make_judge(const Rule& rule, const JudgedChannel& channel);
/// The plan lets a case end once its rules are decided, and each of them can be before the last sample. Not where the
/// rate changes: the next case would begin within a rate cycle.
bool may_end_early(const Plan& plan, const Case& the_case);
/// Why the case cannot answer the rule. The filter is known.
void check(const Rule& rule, const Plan& plan, const Case& the_case, std::vector<Refusal>& refusals);

}  // namespace halflsb
