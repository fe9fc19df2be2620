#include <algorithm>
#include <cmath>
#include <string>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/drift_judge.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/drift.hpp"

namespace halflsb {

void check(const DriftRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    const CaseRates rates(plan, the_case);
    const std::int64_t late = std::abs(expected_lag_of(the_case));
    const std::int64_t samples = std::max<std::int64_t>(judged_samples(plan, the_case) - late, 0);
    const std::int64_t unjudged = returned_samples(plan, the_case) - samples;
    const auto refuse = [&](const std::string& problem, const std::string& remedy) {
        refusals.push_back({asked.position, "case \"" + the_case.name + "\"" + problem, remedy});
    };
    const auto at_least = [&](double needed) {
        const auto judged = static_cast<std::int64_t>(std::min(std::ceil(needed), 0x1p52));
        return "give it at least " + std::to_string(rates.sent_for(judged + unjudged)) + " samples";
    };
    if (samples < drift_least_samples) {
        refuse(" is too short for a drift: " + std::to_string(samples) + " samples are judged, and " +
                   std::to_string(drift_least_samples) + " are needed",
               at_least(static_cast<double>(drift_least_samples)));
        return;
    }
    const double feigned = feigned_change_steps * finest_step(plan.signal.output);
    if (rule.change && value_of(*rule.change, plan.signal) < feigned) {
        const double least = feigned / worth_of(rule.change->in, plan.signal);
        const std::string unit = unit_name(rule.change->in, plan.signal);
        refuse(" asks for a change below " + brief(rule.change->number) + " " + unit +
                   ", and rounding alone may feign " + brief(least) + " " + unit,
               "give at least " + brief(least) + ", or max_slope_lsb_per_hour and a longer run");
        return;
    }
    if (!rule.slope) return;
    const double runs_an_hour = 3600.0 * returned_rate_hz(plan, the_case) / static_cast<double>(samples);
    const double least = feigned * runs_an_hour, limit = value_of(*rule.slope, plan.signal);
    if (limit >= least) return;
    const std::string unit = unit_name(rule.slope->in, plan.signal) + " per hour";
    refuse(" asks for a slope below " + brief(rule.slope->number) + " " + unit + ", and over " +
               std::to_string(samples) + " samples rounding alone may feign " +
               brief(least / worth_of(rule.slope->in, plan.signal)),
           limit > 0.0 ? at_least(static_cast<double>(samples) * least / limit) + ", or a wider limit"
                       : "give a limit above 0");
}

}  // namespace halflsb
