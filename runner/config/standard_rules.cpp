// Which rules the cases of the standard set are held to.
#include <algorithm>

#include "oracle/judge/admission.hpp"
#include "runner/config/standard_set.hpp"

namespace halflsb {
namespace {

bool is_implicit(const Rule& rule) {
    const auto* latency = std::get_if<LatencyRule>(&rule.kind);
    return latency != nullptr && latency->implicit;
}

/// Takes the rules out that the stimulus cannot answer, and keeps the last refusal of each.
void drop_unanswered(const Plan& plan, Case& the_case, std::vector<Refusal>& dropped) {
    for (Refusal& refusal : refusals(plan, the_case)) {
        std::erase_if(the_case.rules, [&](const Rule& rule) { return rule.position == refusal.position; });
        dropped.push_back(std::move(refusal));
    }
}

}  // namespace

std::vector<Refusal> settle_standard_rules(Plan& plan, const std::vector<Rule>& common) {
    std::vector<Refusal> dropped, problems;
    for (Case& the_case : plan.cases) drop_unanswered(plan, the_case, dropped);
    for (const Rule& rule : common) {
        const bool is_held = std::any_of(plan.cases.begin(), plan.cases.end(), [&](const Case& the_case) {
            return std::any_of(the_case.rules.begin(), the_case.rules.end(),
                               [&](const Rule& held) { return held.position == rule.position; });
        });
        const auto why = std::find_if(dropped.rbegin(), dropped.rend(),
                                      [&](const Refusal& refusal) { return refusal.position == rule.position; });
        if (!is_held && why != dropped.rend()) {
            problems.push_back({rule.position, "no case of the standard set can answer this rule: " + why->problem,
                                "add a [[case]] whose stimulus can: " + why->remedy});
        }
    }
    for (Case& the_case : plan.cases) {
        the_case.has_companions = std::any_of(plan.cases.begin(), plan.cases.end(), [&](const Case& other) {
            return other.companion && other.companion->base == the_case.name && !other.rules.empty();
        });
    }
    std::erase_if(plan.cases, [](const Case& the_case) {
        return !the_case.has_companions && std::all_of(the_case.rules.begin(), the_case.rules.end(), is_implicit);
    });
    // Its companions alone would judge no filter.
    const bool is_judged = std::any_of(plan.cases.begin(), plan.cases.end(), [&](const Case& the_case) {
        return std::any_of(the_case.rules.begin(), the_case.rules.end(), [&](const Rule& rule) {
            const auto is_same = [&](const Rule& asked) { return asked.position == rule.position; };
            return std::any_of(common.begin(), common.end(), is_same) || (!the_case.companion && !is_implicit(rule));
        });
    });
    if (!is_judged && problems.empty() && !dropped.empty()) {
        problems.push_back(
            {{plan.file, 1, 1},
             "the plan has no [[case]], and the standard set has no limit for this filter: " + dropped.front().problem,
             "add a [[rule]] of kind \"error\" with a limit in numbers"});
    }
    return problems;
}

}  // namespace halflsb
