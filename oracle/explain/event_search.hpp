// Faults that happen at some samples and not at others: found by following the capture from one of them to the next.
#pragma once

#include <functional>
#include <vector>

#include "oracle/explain/capture_fit.hpp"

namespace halflsb {

/// Boards whose passage has events that repeat, or happen once, in the way that the captures show: each kind is put
/// where the capture leaves `from`, and again where it then leaves that board; the distance is the period. Costs some
/// runs of a twin for each kind.
std::vector<Hypothesis> event_hypotheses(const Hypothesis& from, const CaptureSet& captures,
                                         const std::function<bool()>& go_on);

}  // namespace halflsb
