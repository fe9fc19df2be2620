#include "oracle/judge/rule_kinds.hpp"

#include <algorithm>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/companion_judge.hpp"
#include "oracle/judge/crosstalk_judge.hpp"
#include "oracle/judge/deadline_judge.hpp"
#include "oracle/judge/drift_judge.hpp"
#include "oracle/judge/error_judge.hpp"
#include "oracle/judge/exact_judge.hpp"
#include "oracle/judge/headroom_judge.hpp"
#include "oracle/judge/latency_check.hpp"
#include "oracle/judge/latency_fraction.hpp"
#include "oracle/judge/noise_judge.hpp"
#include "oracle/judge/response_judge.hpp"
#include "oracle/judge/silence_judge.hpp"
#include "oracle/judge/tone_judge.hpp"
#include "oracle/judge/transition_judge.hpp"
#include "oracle/judge/unchanged_judge.hpp"

namespace halflsb {
namespace {

// Judged elsewhere; of a latency the fraction of a sample is not (latency_fraction.hpp).
WantedReferences wanted_by(const LatencyRule&, bool) { return {}; }
WantedReferences wanted_by(const UnchangedRule&, bool) { return {}; }
std::unique_ptr<RuleJudge> make_judge(const UnchangedRule&, const Rule&, const JudgedChannel&) { return nullptr; }
template <AsksForCompanions Kind>
WantedReferences wanted_by(const Kind&, bool) {
    return {};
}
template <AsksForCompanions Kind>
std::unique_ptr<RuleJudge> make_judge(const Kind&, const Rule&, const JudgedChannel&) {
    return nullptr;
}
WantedReferences wanted_by(const DeadlineRule&, bool) { return {}; }
std::unique_ptr<RuleJudge> make_judge(const DeadlineRule&, const Rule&, const JudgedChannel&) { return nullptr; }

}  // namespace

WantedReferences wanted_references(const Case& the_case, int channel) {
    WantedReferences wanted;
    for (const Rule& rule : the_case.rules) {
        const WantedReferences more =
            std::visit([&](const auto& kind) { return wanted_by(kind, is_driven(the_case, channel)); }, rule.kind);
        wanted.design = wanted.design || more.design;
        wanted.twin = wanted.twin || more.twin;
        wanted.rails = wanted.rails || more.rails;
    }
    return wanted;
}

std::unique_ptr<RuleJudge> make_judge(const Rule& rule, const JudgedChannel& channel) {
    return std::visit([&](const auto& kind) { return make_judge(kind, rule, channel); }, rule.kind);
}

bool may_end_early(const Plan& plan, const Case& the_case) {
    // Companions are held against all of it.
    if (plan.streams_whole || plan.filter_is_unknown || the_case.has_companions || CaseRates(plan, the_case).changes())
        return false;
    return std::all_of(the_case.rules.begin(), the_case.rules.end(), [](const Rule& rule) {
        return std::visit([](const auto& kind) { return kind.ends_early; }, rule.kind);
    });
}

void check(const Rule& rule, const Plan& plan, const Case& the_case, std::vector<Refusal>& refusals) {
    std::visit([&](const auto& kind) { check(kind, rule, plan, the_case, refusals); }, rule.kind);
}

}  // namespace halflsb
