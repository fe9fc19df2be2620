// What a plan asks that its stimuli cannot answer: found on paper, refused before anything is streamed.
#pragma once

#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"

namespace halflsb {

/// Rules of the case that this stimulus cannot answer: a written latency rule where the reference of a driven
/// channel looks the same at another lag, a response band without power or bins or of a filter that is not linear,
/// `unchanged` of a case that starts running, a companion that cannot be sent; or every one of them, when the discard leaves nothing or the filter
/// changes the rate. A plan with an unknown filter has no reference: its reader refuses the rules that need one, here
/// they are passed over. Costs up to one pass of the reference for a written latency rule, nothing to speak of
/// otherwise.
std::vector<Refusal> refusals(const Plan& plan, const Case& the_case);

}  // namespace halflsb
