#include <algorithm>
#include <array>
#include <string>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/covered_arithmetic.hpp"
#include "oracle/judge/crosstalk_judge.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/coupling.hpp"

namespace halflsb {
namespace {

/// Of each batch so many are looked at: a plan of hours is read at once.
constexpr std::int64_t most_looked_at = 4096;

/// How many batches of the case begin with at least a quarter of the mean power, counted without the mean: the spread
/// over them says how sure a coupling is.
int loud_batches(const Plan& plan, const Case& the_case) {
    const std::int64_t length = the_case.stimulus->length_samples();
    std::array<double, coupling_batches> power{};
    std::vector<double> values;
    for (std::int64_t batch = 0; batch < coupling_batches; ++batch) {
        const std::int64_t first = batch * (length / coupling_batches);
        std::vector<Code> codes(static_cast<std::size_t>(std::min(length / coupling_batches, most_looked_at)));
        std::vector<double> more(codes.size());
        fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, first, codes);
        values_of(plan.signal.input, codes, more);
        values.insert(values.end(), more.begin(), more.end());
    }
    double sum = 0.0, all = 0.0;
    for (const double value : values) sum += value;
    const double mean = sum / static_cast<double>(values.size());
    const std::size_t each_batch = values.size() / coupling_batches;
    for (std::size_t i = 0; i < values.size(); ++i) power[i / each_batch] += (values[i] - mean) * (values[i] - mean);
    for (const double each : power) all += each;
    if (!(all > 0.0)) return 0;
    return static_cast<int>(std::count_if(power.begin(), power.end(), [&](double each) {
        return each >= 0.25 * all / static_cast<double>(coupling_batches);
    }));
}

void check_coupling(const Rule& asked, const Plan& plan, const Case& the_case, std::vector<Refusal>& refusals) {
    constexpr int loud_enough = 3 * coupling_batches / 4;
    const std::int64_t late = std::max(expected_lag_of(the_case), 0);
    const std::int64_t samples = judged_samples(plan, the_case) - late;
    const CaseRates rates(plan, the_case);
    if (samples < coupling_least_samples) {
        const std::int64_t skipped = first_judged_sample(plan, the_case);
        refusals.push_back({asked.position,
                            "case \"" + the_case.name + "\" is too short for a coupling: " +
                                std::to_string(std::max<std::int64_t>(samples, 0)) + " samples are judged, and " +
                                std::to_string(coupling_least_samples) + " are needed",
                            "give it at least " +
                                std::to_string(rates.sent_for(skipped + late + coupling_least_samples)) + " samples"});
    } else if (loud_batches(plan, the_case) < loud_enough) {
        refusals.push_back({asked.position,
                            "the stimulus of case \"" + the_case.name + "\" (shape = \"" + the_case.shape +
                                "\") has its power in a part of the case, so nothing says how sure a coupling is",
                            "use shape = \"noise\""});
    }
}

}  // namespace

void check(const CrosstalkRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    if (plan.signal.channels < 2) {
        refusals.push_back({asked.position, "crosstalk is between channels, and the signal has one",
                            "say channels = 2 or more in [signal], or leave the rule out"});
        return;
    }
    if (!the_case.channel) {
        refusals.push_back({asked.position,
                            "case \"" + the_case.name + "\" drives all channels, so none is left to listen on",
                            "drive one alone: channel = 1 in its [case.stimulus], and a case for each of the others"});
        return;
    }
    if (rule.max_db) check_coupling(asked, plan, the_case, refusals);
    if (!rule.largest || !rule.largest->is_derived) return;
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        if (is_driven(the_case, channel)) continue;
        const auto chain = described_channel(plan, the_case, channel);
        if (!chain) return;  // the reader has refused it
        if (auto refusal = not_covered(asked, plan.signal, the_case, *chain)) {
            refusals.push_back(std::move(*refusal));
            return;
        }
        const auto derived = derived_limits(plan, the_case, channel);
        if (!derived || derived->error.largest() <= full_scale_value(plan.signal.output)) continue;
        refusals.push_back(too_wide(asked, plan.signal, the_case, derived->error.largest()));
        return;
    }
}

}  // namespace halflsb
