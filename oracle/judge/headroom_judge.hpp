// The rule headroom: under a stimulus that drives a node of the filter as hard as any can, nothing wraps and nothing
// clips that was not declared to.
//
// A sample is off when it lies beyond the derived ends of its error. Where derived limits claim nothing, because a
// declared word may be left, the twin is the reference, as long as every sample before equalled it. So a board that
// does what was declared has no sample that is off, and cannot fail. An off sample counts as
//   wrapped  when it lies a whole number of 2^k LSB away, within the ends of the error, 2^k being at least a 64th of
//            full scale and 64 times these ends; or whole turns of the output's word away from the design, which is
//            not cut off, within a 64th of full scale,
//   clipped  when it falls short of the reference and stands at the response's own largest or smallest code, with
//            another one, at the rail, or where the response is clipped at the same distance on the other side.
// Any other error is none of this rule's; the more of it there is, the less is said (docs/methods.md).
#pragma once

#include <memory>
#include <vector>

#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

WantedReferences wanted_by(const HeadroomRule& rule, bool is_driven);
/// Nothing of a channel that is not driven.
std::unique_ptr<RuleJudge> make_judge(const HeadroomRule& rule, const Rule& asked, const JudgedChannel& channel);
/// Derived limits must follow from the arithmetic, and the stimulus must drive some node.
void check(const HeadroomRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
