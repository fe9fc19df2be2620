#include <algorithm>
#include <cmath>
#include <string>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/response_judge.hpp"
#include "oracle/judge/response_phase.hpp"
#include "oracle/judge/units.hpp"

namespace halflsb {
namespace {

/// Behind a decimator the images of what lies above half the rate of its output cannot be told from what lies below.
/// False: a refusal was added.
bool response_is_told(const Plan& plan, const Case& the_case, const Rule& asked, std::vector<Refusal>& refusals) {
    const RateRatio ratio = CaseRates(plan, the_case).ratio();
    if (ratio.down == 1) return true;
    if (ratio.up > 1) {
        refusals.push_back({asked.position,
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
    refusals.push_back({asked.position,
                        "case \"" + the_case.name +
                            "\" asks for the response of a decimator with a stimulus that reaches " +
                            brief(highest * returned_hz) + " Hz, and what lies above " + brief(returned_hz / 2.0) +
                            " Hz, half the rate of its output, comes through at other frequencies",
                        "use a multitone, a sine or a chirp below " + brief(returned_hz / 2.0) + " Hz"});
    return false;
}

/// Within one realisation. False: a refusal was added.
bool tones_are_told(const Plan& plan, const Case& the_case, const Rule& asked, const Spectrum& spectrum,
                    std::vector<Refusal>& refusals) {
    const Spectrum::Realisations& sent = spectrum.realisations;
    const CaseRates rates(plan, the_case);
    if (sent.count > 1 && sent.samples % rates.cycle().inputs != 0) {
        refusals.push_back({asked.position,
                            "case \"" + the_case.name + "\" sends realisations of " + std::to_string(sent.samples) +
                                " samples, and its filter, which returns " + std::to_string(rates.cycle().outputs) +
                                " for " + std::to_string(rates.cycle().inputs) + ", needs a multiple of " +
                                std::to_string(rates.cycle().inputs),
                            "send " + std::to_string(sent.count * rates.whole_cycles(sent.samples)) +
                                " samples from index " + std::to_string(sent.first_sample) + " on"});
        return false;
    }
    const MeasuredRealisations parts = measured_realisations(plan, the_case);
    if (!tones_resolved(spectrum.tones, parts.samples)) {
        refusals.push_back(
            {asked.position,
             "case \"" + the_case.name + "\" is too short to keep its tones apart: " + std::to_string(parts.samples) +
                 " samples in a realisation",
             "tones must be 4 cycles apart over it, and as far from 0 and Nyquist: lengthen it, or give it "
             "fewer realisations"});
        return false;
    }
    // 3 realisations give 4 degrees of freedom, whose t quantile at 1e-6 is 41.
    constexpr std::int64_t fewest = 4;
    if (parts.count < fewest) {
        refusals.push_back({asked.position,
                            "case \"" + the_case.name + "\" asks for the response of tones in " +
                                (parts.count == 1 ? "one realisation" : std::to_string(parts.count) + " realisations") +
                                ", and nothing says how sure their gains are: rounding repeats with the period",
                            "give the stimulus realisations = 16, each with phases of its own"});
        return false;
    }
    return true;
}

/// A stimulus for a remedy: more frequencies, where its bins are too far apart.
std::string closer_bins(const Plan& plan, const Case& the_case, const Spectrum& spectrum) {
    if (!spectrum.tones.empty()) return ", or a multitone with tones in it";
    const double spacing_hz =
        returned_rate_hz(plan, the_case) / static_cast<double>(response_segment_for(judged_samples(plan, the_case)));
    return "; its bins are " + brief(spacing_hz) + " Hz apart, a longer record brings them closer";
}

/// Points enough to hold the phase at.
void check_phase(const PhaseLimits& limits, const Plan& plan, const Case& the_case, const Rule& asked,
                 const Spectrum& spectrum, std::vector<Refusal>& refusals) {
    if (!limits.any()) return;
    // As the judge's: two tones make a step, and so do bins a main lobe of the window apart.
    const std::size_t fewest = !limits.limits_delay() ? 1 : spectrum.tones.empty() ? 5 : 2;
    const double sent_hz = rate_hz_of(plan, the_case);
    const std::vector<double> answered = answerable_hz(ResponseBand{0.0, HUGE_VAL, {}, {}}, plan, the_case);
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        if (!is_driven(the_case, channel)) continue;
        const FilterChain chain = chain_of(plan, the_case, channel);
        std::vector<BandPoint> points;
        for (const double hz : answered) points.push_back({0, hz, response_at(chain, hz / sent_hz)});
        const std::size_t found = phase_points(limits, points, returned_rate_hz(plan, the_case)).size();
        if (found >= fewest) continue;
        refusals.push_back({asked.position,
                            "the stimulus of case \"" + the_case.name + "\" has " + std::to_string(found) +
                                (found == 1 ? " frequency" : " frequencies") +
                                " where the rule limits phase or group "
                                "delay, and it takes " +
                                std::to_string(fewest),
                            "use noise or a chirp over that band" + closer_bins(plan, the_case, spectrum)});
        return;
    }
}

}  // namespace

void check(const ResponseRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        if (!is_driven(the_case, channel) || is_linear(chain_of(plan, the_case, channel))) continue;
        refusals.push_back({asked.position,
                            "case \"" + the_case.name +
                                "\" asks for the response of a filter with a median in it, which is not linear and "
                                "has none",
                            "leave the rule out; rules about error, latency and unchanged hold"});
        return;
    }
    if (!response_is_told(plan, the_case, asked, refusals)) return;
    const Spectrum spectrum = measured_spectrum(plan, the_case);
    const std::string noise = "use noise or a chirp over that band";
    if (spectrum.tones.empty() && spectrum.bands.empty()) {
        refusals.push_back(
            {asked.position,
             "case \"" + the_case.name + "\" cannot answer a response rule with shape = \"" + the_case.shape + "\"",
             "use noise, a chirp, a sine or a multitone"});
        return;
    }
    const std::int64_t length = judged_samples(plan, the_case);
    if (!spectrum.tones.empty() && !tones_are_told(plan, the_case, asked, spectrum, refusals)) return;
    constexpr std::int64_t shortest_samples = 64;
    if (spectrum.tones.empty() && length < shortest_samples) {
        refusals.push_back(
            {asked.position,
             "case \"" + the_case.name + "\" is too short for a response: " + std::to_string(length) + " samples",
             "give it at least " + std::to_string(shortest_samples) + " samples"});
        return;
    }
    for (const ResponseBand& band : rule.bands) {
        if (!answerable_hz(band, plan, the_case).empty()) continue;
        const std::string band_text = brief(band.from_hz) + " to " + brief(band.to_hz) + " Hz";
        std::string remedy = noise;
        if (spectrum.tones.empty()) {
            remedy += closer_bins(plan, the_case, spectrum);
        } else {
            remedy += ", or a multitone with a tone in it";
        }
        refusals.push_back({asked.position,
                            "the stimulus of case \"" + the_case.name + "\" says nothing about the band " + band_text,
                            remedy});
    }
    if (rule.mask && answerable_hz(*rule.mask, plan, the_case).empty()) {
        refusals.push_back(
            {asked.position,
             "the stimulus of case \"" + the_case.name + "\" says nothing about the mask " + rule.mask->name,
             noise + closer_bins(plan, the_case, spectrum)});
    }
    check_phase(rule.phase, plan, the_case, asked, spectrum, refusals);
}

}  // namespace halflsb
