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
    std::string unknown;       ///< why nothing can be said ("rounding is not said"); "" otherwise
    std::int64_t samples = 0;  ///< looked at
    bool is_cut = false;       ///< of long cases only the first sensitivity_samples were
    /// A firmware that computes as promised fails this rule in this case, so nothing that is seen there tells anything
    /// of a change; "" when all pass.
    std::string failing_rule = {}, failing_case = {};
};

inline constexpr std::int64_t sensitivity_samples = std::int64_t{1} << 17;

/// Over the cases of these indices, rules `unchanged` left out. Looks at a case until a change is seen, so it costs a
/// twin and a judge for each change and case in the worst case. `go_on` is asked between cases and changes.
Sensitivity sensitivity(
    const Plan& plan, const std::vector<std::size_t>& cases, const std::function<bool()>& go_on = [] { return true; });

}  // namespace halflsb
