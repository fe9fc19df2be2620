#include <algorithm>
#include <string>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/covered_arithmetic.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/silence_judge.hpp"
#include "oracle/judge/silence_span.hpp"
#include "stimuli/samples_text.hpp"

namespace halflsb {
namespace {

/// Of a channel. False: a refusal was added.
bool falls_silent(const Rule& asked, const Plan& plan, const Case& the_case, int channel,
                  std::vector<Refusal>& refusals) {
    const auto span = silence_span(plan, the_case, channel);
    if (!span) {
        refusals.push_back({asked.position,
                            "nothing says when the tail of the filter is over in case \"" + the_case.name +
                                "\": 2^24 samples are not enough",
                            "leave the rule out; rules about error and exact hold"});
        return false;
    }
    if (span->judged_samples >= silence_least_samples) return true;
    const CaseRates rates(plan, the_case);
    const std::int64_t late = std::max(expected_lag_of(the_case), 0);
    const std::int64_t needed = span->tail_sent + rates.sent_for(silence_least_samples + late);
    const std::string takes = "the design's tail takes " + samples_text(span->tail_sent) + " of it, and " +
                              std::to_string(silence_least_samples) + " are judged";
    if (span->silent_sent == 0) {
        refusals.push_back({asked.position,
                            "the stimulus of case \"" + the_case.name + "\" (shape = \"" + the_case.shape +
                                "\") does not end in silence",
                            "use shape = \"burst\" with repeats = 1 and at least " + samples_text(needed) +
                                " of silence behind it: " + takes});
    } else {
        refusals.push_back({asked.position,
                            "case \"" + the_case.name + "\" ends in a silence of " + samples_text(span->silent_sent) +
                                ", and " + std::to_string(needed) + " are needed: " + takes,
                            "lengthen it, or use shape = \"burst\" with repeats = 1 and so much silence behind it"});
    }
    return false;
}

}  // namespace

void check(const SilenceRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        if (!falls_silent(asked, plan, the_case, channel, refusals)) return;
        if (!rule.largest->is_derived) continue;
        const auto chain = described_channel(plan, the_case, channel);
        if (!chain) return;  // the reader has refused it
        if (auto refusal = not_covered(asked, plan.signal, the_case, *chain)) {
            refusals.push_back(std::move(*refusal));
            return;
        }
        const auto ends = derived_silence(plan, the_case, channel);
        if (!ends || ends->largest() <= full_scale_value(plan.signal.output)) continue;
        refusals.push_back(too_wide(asked, plan.signal, the_case, ends->largest()));
        return;
    }
}

}  // namespace halflsb
