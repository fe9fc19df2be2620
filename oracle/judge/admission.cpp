#include "oracle/judge/admission.hpp"

#include <algorithm>
#include <cmath>
#include <cstdlib>
#include <utility>

#include "oracle/arithmetic/described.hpp"
#include "oracle/arithmetic/family.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/leftover.hpp"
#include "oracle/judge/rate_admission.hpp"
#include "oracle/judge/response_verdict.hpp"
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

void check_latency(const Plan& plan, const Case& the_case, const Rule& rule, std::vector<Refusal>& refusals) {
    if (plan.filter_is_unknown) return;
    const LatencyEvidence evidence = latency_evidence(plan, the_case);
    if (evidence.can_tell) return;
    Refusal refusal{rule.position, {}, {}};
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

/// The first samples of a running case hang on the case before, and the hash of an accepted run is over all of them.
void check_unchanged(const Case& the_case, const Rule& rule, std::vector<Refusal>& refusals) {
    if (the_case.start != Start::running) return;
    refusals.push_back({rule.position,
                        "case \"" + the_case.name +
                            "\" starts running, so its first samples hang on what ran before it and cannot equal "
                            "those of an accepted run",
                        "start it with \"reset\" or \"flush\", or write the rule in another case"});
}

/// A twin needs the whole arithmetic, and starts as the board does.
void check_exact(const Plan& plan, const Case& the_case, const Rule& rule, std::vector<Refusal>& refusals) {
    if (plan.filter_is_unknown) return;
    bool forgets = true;
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        const auto result = describe(chain_of(plan, the_case, channel), plan.signal.input, plan.signal.output,
                                     plan.signal.output_per_input);
        if (!result.described) return;  // the reader has refused it
        if (const auto& missing = result.described->missing) {
            const bool is_alone = result.described->stages.size() == 1;
            refusals.push_back({rule.position,
                                "exact needs the whole arithmetic, and " +
                                    (is_alone ? "" : "of stage " + std::to_string(missing->stage + 1) + " ") +
                                    missing->error.problem,
                                missing->error.remedy});
            return;
        }
        const auto samples = samples_to_forget(*result.described);
        forgets = forgets && samples && *samples <= the_case.start_samples;
    }
    if (the_case.start == Start::running || (the_case.start == Start::flush && !forgets)) {
        refusals.push_back({rule.position,
                            "case \"" + the_case.name + "\" starts " +
                                (the_case.start == Start::running ? "running" : "with a flush") +
                                ", which leaves the firmware in a state that nobody knows to the bit",
                            "start it with \"reset\", or write the rule in another case"});
    }
}

/// Why no bound covers this arithmetic. {problem, remedy}
std::optional<std::pair<std::string, std::string>> not_covered(const Signal& signal, const DescribedChain& chain) {
    int exponent = 0;
    if (std::frexp(signal.output_per_input, &exponent) != 0.5) {
        return std::pair("output_per_input is no power of two, and nothing says how it is rounded",
                         "give the scale as a stage of its own, or a number for the limit");
    }
    for (std::size_t i = 0; i < chain.stages.size(); ++i) {
        const DescribedStage& stage = chain.stages[i];
        if (stage.number == NumberKind::float32 && family_of(stage.stage) == Family::cic) {
            return std::pair("a cic in float32 has none: what its integrators lose no comb brings back",
                             "give number = \"integer\" and words of whole numbers, or a number for the limit");
        }
        if (stage.stage.initial == Initial::zeros) continue;
        // Whole numbers that start as if the first sample had gone on for ever err as if it had.
        const bool is_finite = samples_to_forget(stage).has_value() && stage.number == NumberKind::integer;
        if (stage.stage.initial == Initial::first_sample && is_finite) continue;
        return std::pair(
            "the state that initial puts into stage " + std::to_string(i + 1) + " is rounded in a way that nobody said",
            "leave initial out, or give a number for the limit");
    }
    return std::nullopt;
}

/// A derived limit must be a limit: finite, and narrower than full scale.
void check_derived(const Plan& plan, const Case& the_case, const Rule& rule, std::vector<Refusal>& refusals) {
    const auto& asked = std::get<ErrorRule>(rule.kind);
    if (plan.filter_is_unknown || !is_derived(asked)) return;
    const double widest = full_scale_value(plan.signal.output);
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        const auto chain = described_channel(plan, the_case, channel);
        if (!chain) return;  // the reader has refused it
        if (const auto why = not_covered(plan.signal, *chain)) {
            refusals.push_back({rule.position,
                                "no limit follows from the arithmetic in case \"" + the_case.name + "\": " + why->first,
                                why->second});
            return;
        }
        const auto limits = derived_limits(plan, the_case, channel);
        if (!limits) return;
        double wanted = 0.0;
        if (asked.largest && asked.largest->is_derived) wanted = limits->error.largest();
        if (asked.rms && asked.rms->is_derived) wanted = std::max(wanted, limits->worst_rms);
        if (asked.bias && asked.bias->is_derived) wanted = std::max(wanted, limits->worst_bias.largest());
        if (wanted <= widest) continue;
        const Limit::In in = natural_unit(plan.signal);
        const std::string size = std::isfinite(wanted) ? "is " + brief(wanted / worth_of(in, plan.signal)) + " " +
                                                             unit_name(in, plan.signal) + ", wider than full scale"
                                                       : "has no end";
        refusals.push_back({rule.position,
                            "the limit that follows from the arithmetic in case \"" + the_case.name + "\" " + size,
                            "say more of the arithmetic (halflsb predict shows what it comes from), give a number, or "
                            "use kind = \"exact\""});
        return;
    }
}

/// A running case must have something left to judge.
void check_discard(const Plan& plan, const Case& the_case, std::vector<Refusal>& refusals) {
    if (judged_samples(plan, the_case) > 0) return;
    const std::string length = std::to_string(the_case.stimulus->length_samples());
    refusals.push_back({the_case.position,
                        "case \"" + the_case.name + "\" discards its first " + std::to_string(the_case.start_samples) +
                            " samples and has only " + length,
                        "discard fewer than " + length + ", or lengthen the stimulus"});
}

void check_response(const Plan& plan, const Case& the_case, const Rule& rule, std::vector<Refusal>& refusals) {
    if (plan.filter_is_unknown) return;
    for (int channel = 1; channel <= plan.signal.channels; ++channel) {
        if (!is_driven(the_case, channel) || is_linear(chain_of(plan, the_case, channel))) continue;
        refusals.push_back({rule.position,
                            "case \"" + the_case.name +
                                "\" asks for the response of a filter with a median in it, which is not linear and "
                                "has none",
                            "leave the rule out; rules about error, latency and unchanged hold"});
        return;
    }
    if (!response_is_told(plan, the_case, rule, refusals)) return;
    const Spectrum spectrum = measured_spectrum(plan, the_case);
    const std::string noise = "use noise or a chirp over that band";
    if (spectrum.tones.empty() && spectrum.bands.empty()) {
        refusals.push_back(
            {rule.position,
             "case \"" + the_case.name + "\" cannot answer a response rule with shape = \"" + the_case.shape + "\"",
             "use noise, a chirp, a sine or a multitone"});
        return;
    }
    const std::int64_t length = judged_samples(plan, the_case);
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
             "give it at least " + std::to_string(shortest_samples) + " samples"});
        return;
    }
    for (const ResponseBand& band : std::get<ResponseRule>(rule.kind).bands) {
        if (!answerable_hz(band, plan, the_case).empty()) continue;
        const std::string band_text = brief(band.from_hz) + " to " + brief(band.to_hz) + " Hz";
        std::string remedy = noise;
        if (spectrum.tones.empty()) {
            const double spacing_hz =
                returned_rate_hz(plan, the_case) / static_cast<double>(response_segment_for(length));
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
    check_rate(plan, the_case, found);
    if (!found.empty()) return found;
    check_discard(plan, the_case, found);
    if (!found.empty()) return found;
    for (const Rule& rule : the_case.rules) {
        if (const auto* latency = std::get_if<LatencyRule>(&rule.kind); latency != nullptr && !latency->implicit) {
            check_latency(plan, the_case, rule, found);
        } else if (std::holds_alternative<ResponseRule>(rule.kind)) {
            check_response(plan, the_case, rule, found);
        } else if (std::holds_alternative<UnchangedRule>(rule.kind)) {
            check_unchanged(the_case, rule, found);
        } else if (std::holds_alternative<ExactRule>(rule.kind)) {
            check_exact(plan, the_case, rule, found);
        } else if (std::holds_alternative<ErrorRule>(rule.kind)) {
            check_derived(plan, the_case, rule, found);
        }
    }
    return found;
}

}  // namespace halflsb
