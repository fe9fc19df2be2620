// One mutant through everything: the standard set sent to it, judged, and explained from what came back.
#pragma once

#include <memory>
#include <string>
#include <vector>

#include "oracle/explain/finding.hpp"
#include "oracle/judge/plan.hpp"
#include "tests/mutants/filters.hpp"

namespace halflsb::mutants {

/// The plan of a filter with its standard set, without the long run. Aborts on a plan that is refused.
Plan plan_of(const FilterUnderTest& filter);

/// What a board returns to each case of the plan, in order; all channels adjacent. As many samples as the wire expects:
/// a board that lost some repeats its last.
std::vector<std::vector<Code>> responses_of(Board& board, const Plan& plan);

/// The first rule that fails, "noise: exact"; empty: none does.
std::string first_failure(const Plan& plan, const std::vector<std::vector<Code>>& responses);

/// As `halflsb explain RUN` does; of the first channel that is not as declared.
struct Explained {
    Finding finding;
    double seconds = 0.0;
};
Explained explained(const Plan& plan, const std::vector<std::vector<Code>>& responses);

/// Stimuli beyond the standard set: the probes, and long white noise. Codes of all channels adjacent.
std::vector<std::vector<Code>> further_stimuli(const Signal& signal);
std::vector<std::vector<Code>> further_responses(Board& board, const std::vector<std::vector<Code>>& stimuli);

}  // namespace halflsb::mutants
