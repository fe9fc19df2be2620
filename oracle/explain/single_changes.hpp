// All boards that are one change away, in every slot: the grammar of what explain can say.
#pragma once

#include <vector>

#include "oracle/explain/hypothesis.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

/// Events that hang on where they happen are not among them (event_search.hpp). A slot that `from` has changed already
/// is left alone, but for the filter and the arithmetic, of which other words may change.
std::vector<Hypothesis> single_changes(const Hypothesis& from, const Signal& signal);

}  // namespace halflsb
