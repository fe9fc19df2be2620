#include "oracle/judge/latency_check.hpp"

#include <cstdlib>
#include <string>
#include <utility>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

/// Noise for a remedy: long enough once the discard of a running case is over.
std::int64_t noise_samples(const Plan& plan, const Case& the_case) {
    const std::int64_t discarded = the_case.start == Start::running ? the_case.start_samples : 0;
    return CaseRates(plan, the_case).sent_for(4096) + discarded;
}

/// White noise has no second lag that looks like the first: would it do for this filter?
bool noise_can_tell(const Plan& plan, const Case& the_case) {
    ParameterValues values;
    values.set("length_samples", noise_samples(plan, the_case));
    values.set("level_ratio", 0.5);
    auto noise = make_stimulus("noise", values, {rate_hz_of(plan, the_case), plan.signal.input});
    if (!noise) return false;
    Case trial = the_case;
    trial.stimulus = std::move(*noise);
    return latency_evidence(plan, trial).can_tell;
}

/// Eight segments of the shortest kind, overlapped, and their spread.
constexpr std::int64_t fewest_for_fraction = 1024;

}  // namespace

bool tells_fraction(const Plan& plan, const Case& the_case) {
    // A chirp passes each frequency once: nothing says how sure it is.
    return the_case.shape != "chirp" && !the_case.stimulus->spectrum().bands.empty() &&
           judged_samples(plan, the_case) >= fewest_for_fraction;
}

void check(const LatencyRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    if (rule.implicit) return;
    if (rule.max_fraction_samples && !tells_fraction(plan, the_case)) {
        refusals.push_back({asked.position,
                            "case \"" + the_case.name + "\" cannot tell a fraction of its latency with " +
                                std::to_string(judged_samples(plan, the_case)) + " samples of shape = \"" +
                                the_case.shape + "\"",
                            "give it noise or a prbs that returns at least " + std::to_string(fewest_for_fraction) +
                                " samples, or write the limit in another case"});
        return;
    }
    const LatencyEvidence evidence = latency_evidence(plan, the_case);
    if (evidence.can_tell) return;
    Refusal refusal{asked.position, {}, {}};
    if (evidence.expected_is_outside) {
        const int expected = expected_lag_of(the_case), window = lag_window_of(plan, the_case);
        refusal.problem = "case \"" + the_case.name + "\" is too short for a latency of " + std::to_string(expected) +
                          (std::abs(expected) == 1 ? " sample" : " samples") + ": lags of -" + std::to_string(window) +
                          " to " + std::to_string(window) + " can be told from " +
                          std::to_string(judged_samples(plan, the_case)) + " samples";
        const std::int64_t returned = first_judged_sample(plan, the_case) + 2 * std::abs(expected) + 1;
        refusal.remedy =
            "give it at least " + std::to_string(CaseRates(plan, the_case).sent_for(returned)) + " samples";
        refusals.push_back(std::move(refusal));
        return;
    }
    refusal.problem = "case \"" + the_case.name + "\" cannot tell its latency" +
                      (evidence.channel > 0 ? " on channel " + std::to_string(evidence.channel) : "") + ": a lag of " +
                      std::to_string(evidence.hardest_lag) + " would leave a squared residual of " +
                      brief(evidence.smallest_ratio) + " sigma^2, below " + brief(latency_evidence_ratio);
    if (the_case.stimulus->length_samples() > evidence.samples)
        refusal.problem += ", in its first " + std::to_string(evidence.samples) + " samples";
    refusal.remedy =
        noise_can_tell(plan, the_case)
            ? "give it noise (shape = \"noise\", level_ratio = 0.5, length_samples = " +
                  std::to_string(noise_samples(plan, the_case)) + "), or write the rule in another case"
            : "no stimulus of this filter tells it within these error limits; tighten rms_lsb or leave the rule out";
    refusals.push_back(std::move(refusal));
}

}  // namespace halflsb
