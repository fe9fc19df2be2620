#include "oracle/judge/admission.hpp"

#include <algorithm>
#include <charconv>

#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/response_verdict.hpp"

namespace halflsb {
namespace {

std::string brief(double number) {
    char text[32];
    const auto end = std::to_chars(text, text + sizeof text, number, std::chars_format::general, 4).ptr;
    return std::string(text, end);
}

constexpr std::int64_t noise_length_samples = 4096;

/// White noise has no second lag that looks like the first: would it do for this filter?
bool noise_can_tell(const Plan& plan, const Case& the_case) {
    ParameterValues values;
    values.set("length_samples", noise_length_samples);
    values.set("level_ratio", 0.5);
    auto noise = make_stimulus("noise", values, {plan.signal.rate_hz, plan.signal.input});
    if (!noise) return false;
    Case trial = the_case;
    trial.stimulus = std::move(*noise);
    return latency_evidence(plan, trial).can_tell;
}

void check_latency(const Plan& plan, const Case& the_case, const Rule& rule, std::vector<Refusal>& refusals) {
    const LatencyEvidence evidence = latency_evidence(plan, the_case);
    if (evidence.can_tell) return;
    Refusal refusal{rule.position, {}, {}};
    refusal.problem = "case \"" + the_case.name + "\" cannot tell its latency: a lag of " +
                      std::to_string(evidence.hardest_lag) + " would leave a squared residual of " +
                      brief(evidence.smallest_ratio) + " sigma^2, below " + brief(latency_evidence_ratio);
    if (the_case.stimulus->length_samples() > latency_evidence_samples(plan.filter)) {
        refusal.problem += ", in its first " + std::to_string(latency_evidence_samples(plan.filter)) + " samples";
    }
    refusal.remedy =
        noise_can_tell(plan, the_case)
            ? "give it noise (shape = \"noise\", level_ratio = 0.5, length_samples = " +
                  std::to_string(noise_length_samples) + "), or write the rule in another case"
            : "no stimulus of this filter tells it within these error limits; tighten rms_lsb or leave the rule out";
    refusals.push_back(std::move(refusal));
}

void check_response(const Plan& plan, const Case& the_case, const Rule& rule, std::vector<Refusal>& refusals) {
    const Stimulus& stimulus = *the_case.stimulus;
    const Spectrum spectrum = stimulus.spectrum();
    const std::string noise = "use noise or a chirp over that band";
    if (spectrum.tones.empty() && spectrum.bands.empty()) {
        refusals.push_back(
            {rule.position,
             "case \"" + the_case.name + "\" cannot answer a response rule, which is not for a " + the_case.shape,
             "use noise, a chirp, a sine or a multitone"});
        return;
    }
    const std::int64_t length = stimulus.length_samples();
    if (!tones_resolved(spectrum.tones, length)) {
        refusals.push_back(
            {rule.position,
             "case \"" + the_case.name + "\" is too short to keep its tones apart: " + std::to_string(length) +
                 " samples",
             "tones must be 4 cycles apart over the record, and as far from 0 and Nyquist: lengthen it"});
        return;
    }
    constexpr std::int64_t shortest_samples = 64;
    if (spectrum.tones.empty() && length < shortest_samples) {
        refusals.push_back(
            {rule.position,
             "case \"" + the_case.name + "\" is too short for a response: " + std::to_string(length) + " samples",
             "give it at least " + std::to_string(shortest_samples)});
        return;
    }
    for (const ResponseBand& band : std::get<ResponseRule>(rule.kind).bands) {
        if (!answerable_hz(band, stimulus, plan.signal.rate_hz).empty()) continue;
        const std::string band_text = brief(band.from_hz) + " to " + brief(band.to_hz) + " Hz";
        std::string remedy = noise;
        if (spectrum.tones.empty()) {
            const double spacing_hz = plan.signal.rate_hz / static_cast<double>(response_segment_for(length));
            remedy += "; its bins are " + brief(spacing_hz) + " Hz apart, a longer record brings them closer";
        } else {
            remedy += ", or a multitone with a tone in it";
        }
        refusals.push_back({rule.position,
                            "the stimulus of case \"" + the_case.name + "\" says nothing about the band " + band_text,
                            remedy});
    }
}

}  // namespace

std::vector<Refusal> refusals(const Plan& plan, const Case& the_case) {
    std::vector<Refusal> found;
    for (const Rule& rule : the_case.rules) {
        if (const auto* latency = std::get_if<LatencyRule>(&rule.kind); latency != nullptr && !latency->implicit) {
            check_latency(plan, the_case, rule, found);
        } else if (std::holds_alternative<ResponseRule>(rule.kind)) {
            check_response(plan, the_case, rule, found);
        }
    }
    return found;
}

}  // namespace halflsb
