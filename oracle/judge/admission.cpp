#include "oracle/judge/admission.hpp"

#include <string>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/rate_admission.hpp"
#include "oracle/judge/rule_kinds.hpp"

namespace halflsb {
namespace {

/// A running case must have something left to judge.
void check_discard(const Plan& plan, const Case& the_case, std::vector<Refusal>& refusals) {
    if (judged_samples(plan, the_case) > 0) return;
    const std::string length = std::to_string(the_case.stimulus->length_samples());
    refusals.push_back({the_case.position,
                        "case \"" + the_case.name + "\" discards its first " + std::to_string(the_case.start_samples) +
                            " samples and has only " + length,
                        "discard fewer than " + length + ", or lengthen the stimulus"});
}

}  // namespace

std::vector<Refusal> refusals(const Plan& plan, const Case& the_case) {
    std::vector<Refusal> found;
    // Of a companion both were asked of its base.
    if (!the_case.companion) {
        check_rate(plan, the_case, found);
        if (!found.empty()) return found;
        check_discard(plan, the_case, found);
        if (!found.empty()) return found;
    }
    for (const Rule& rule : the_case.rules) {
        // The reader refuses those that need a reference where there is none.
        if (!plan.filter_is_unknown || !needs_oracle(rule)) check(rule, plan, the_case, found);
    }
    return found;
}

}  // namespace halflsb
