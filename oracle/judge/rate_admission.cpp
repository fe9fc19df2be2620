#include "oracle/judge/rate_admission.hpp"

#include <algorithm>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/response_verdict.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {

void check_rate(const Plan& plan, const Case& the_case, std::vector<Refusal>& refusals) {
    if (plan.filter_is_unknown) return;
    const auto refuse = [&](const std::string& problem, const std::string& remedy, const PlanPosition& position) {
        refusals.push_back(
            {position.line > 0 ? position : the_case.position, "case \"" + the_case.name + "\"" + problem, remedy});
    };
    if (!same_rates(plan, the_case)) {
        refuse(": its channels change the sample rate in different ways, and the samples of an instant travel together",
               "give every channel the same decimators and interpolators, or test the channels in plans of their own",
               the_case.position);
        return;
    }
    const CaseRates rates(plan, the_case);
    if (!rates.changes()) return;
    const std::int64_t cycle = rates.cycle().inputs, longer = std::max(cycle, rates.cycle().outputs);
    if (longer > longest_rate_cycle_samples) {
        refuse(": its filter begins anew only every " + std::to_string(longer) + " samples, " +
                   std::to_string(longest_rate_cycle_samples) + " are possible",
               "let the board return a signal from before its last change of the rate", the_case.position);
        return;
    }
    const std::int64_t length = the_case.stimulus->length_samples();
    if (length % cycle != 0) {
        refuse(" sends " + std::to_string(length) + " samples, and its filter, which returns " +
                   std::to_string(rates.cycle().outputs) + " for " + std::to_string(cycle) + ", needs a multiple of " +
                   std::to_string(cycle),
               "send " + std::to_string(rates.whole_cycles(length)) + " samples", the_case.length_position);
    }
    if (the_case.start == Start::running && the_case.start_samples % cycle != 0) {
        refuse(" discards " + std::to_string(the_case.start_samples) + " samples, and its filter, which returns " +
                   std::to_string(rates.cycle().outputs) + " for " + std::to_string(cycle) + ", needs a multiple of " +
                   std::to_string(cycle),
               "discard_samples = " + std::to_string(rates.whole_cycles(the_case.start_samples)),
               the_case.discard_position);
    }
}

bool response_is_told(const Plan& plan, const Case& the_case, const Rule& rule, std::vector<Refusal>& refusals) {
    const RateRatio ratio = CaseRates(plan, the_case).ratio();
    if (ratio.down == 1) return true;
    if (ratio.up > 1) {
        refusals.push_back({rule.position,
                            "case \"" + the_case.name + "\" asks for the response of a filter that returns " +
                                std::to_string(ratio.up) + " samples for " + std::to_string(ratio.down) +
                                ", in which a tone may fall on its own image",
                            "leave the rule out; rules about error, latency, exact and unchanged hold"});
        return false;
    }
    const Spectrum spectrum = measured_spectrum(plan, the_case);
    double highest = 0.0;
    for (const double tone : spectrum.tones) highest = std::max(highest, tone);
    for (const Spectrum::Band& band : spectrum.bands) highest = std::max(highest, band.to_cycles_per_sample);
    if (highest <= 0.5) return true;
    const double returned_hz = returned_rate_hz(plan, the_case);
    refusals.push_back({rule.position,
                        "case \"" + the_case.name +
                            "\" asks for the response of a decimator with a stimulus that reaches " +
                            brief(highest * returned_hz) + " Hz, and what lies above " + brief(returned_hz / 2.0) +
                            " Hz, half the rate of its output, comes through at other frequencies",
                        "use a multitone, a sine or a chirp below " + brief(returned_hz / 2.0) + " Hz"});
    return false;
}

}  // namespace halflsb
