// Whether the rules of a plan would see a firmware that decided otherwise about its arithmetic: the changed twin stands
// in for the board, and the plan's own rules judge it.
#pragma once

#include <cstdint>
#include <functional>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"

namespace halflsb {

struct ChangeSeen {
    enum class Answer {
        seen,    ///< some rule fails
        unseen,  ///< some sample differs, and every rule passes
        same     ///< no sample differs: with these stimuli it is no change
    };
    std::string change;  ///< as plausible_changes names it
    Answer answer = Answer::same;
    std::string rule, case_name;  ///< seen: the first rule that fails, "error" or "exact", and its case
    std::int64_t differing = 0;   ///< samples that differ from the declared twin, over the cases looked at
    double largest_lsb = 0.0;     ///< by how much at most; of f32 the difference of values
};

struct Sensitivity {
    std::vector<ChangeSeen> changes;
    std::string unknown;            ///< why nothing can be said ("rounding is not said"); "" otherwise
    std::int64_t samples = 0;       ///< looked at
    std::int64_t most_samples = 0;  ///< of one case
    bool is_cut = false;            ///< some case is longer than that
    /// A firmware that computes as promised fails this rule in this case, so nothing that is seen there tells anything
    /// of a change; "" when all pass.
    std::string failing_rule = {}, failing_case = {};
};

/// What a sample costs in a twin: taps, and points of medians, of all stages; at least 1.
std::int64_t operations_a_sample(const FilterChain& filter);
/// Of each case the first ones, at most: 2^17, and fewer where many taps make a twin slow, so that one run of it is
/// over in a second or so.
std::int64_t sensitivity_samples(const FilterChain& filter);

/// Over the cases of these indices, rules `unchanged` left out. Looks at a case until a change is seen, so it costs a
/// twin and a judge for each change and case in the worst case. `go_on` is asked between cases and changes.
Sensitivity sensitivity(
    const Plan& plan, const std::vector<std::size_t>& cases, const std::function<bool()>& go_on = [] { return true; });

}  // namespace halflsb
