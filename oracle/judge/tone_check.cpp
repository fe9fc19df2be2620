#include <algorithm>
#include <cmath>
#include <limits>
#include <string>

#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/latency_evidence.hpp"
#include "oracle/judge/settling.hpp"
#include "oracle/judge/tone_judge.hpp"
#include "oracle/judge/units.hpp"
#include "oracle/measure/harmonics.hpp"
#include "oracle/measure/tone.hpp"

namespace halflsb {

std::optional<double> lone_tone(const Plan& plan, const Case& the_case) {
    const Spectrum spectrum = the_case.stimulus->spectrum();
    if (spectrum.tones.size() != 1 || !spectrum.bands.empty() || !spectrum.steady_from_sample) return std::nullopt;
    return spectrum.tones.front() / returned_per_sent(plan, the_case);
}

std::optional<SampleWindow> tone_window(const Plan& plan, const Case& the_case, int channel, int lag_samples) {
    const auto steady = the_case.stimulus->spectrum().steady_from_sample;
    if (!steady) return std::nullopt;
    const auto settled = first_settled_sample(plan, the_case, channel, *steady, lag_samples);
    if (!settled) return std::nullopt;
    const std::int64_t end = returned_samples(plan, the_case) - std::max(-lag_samples, 0);
    return SampleWindow{std::max(*settled, end - static_cast<std::int64_t>(tone_most_samples)), end};
}

double tone_samples_needed(const ToneRule& rule, double cycles_per_sample) {
    const double room = std::min(cycles_per_sample, 0.5 - cycles_per_sample);
    if (!(room > 0.0)) return std::numeric_limits<double>::infinity();
    return std::max({static_cast<double>(tone_least_samples), std::ceil(1.0 / room), 8.0 * rule.highest_harmonic});
}

namespace {

class ToneCheck {
public:
    ToneCheck(const ToneRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
              std::vector<Refusal>& refusals)
        : rule_(rule), asked_(asked), plan_(plan), case_(the_case), rates_(plan, the_case), refusals_(refusals) {}

    void all() const {
        const auto tone = lone_tone(plan_, case_);
        if (!tone) {
            refuse(
                "whose stimulus does not come to one steady sine",
                "give it shape = \"sine\" without realisations, a step at most added to it, and a length_samples of " +
                    std::to_string(rates_.sent_for(4096)) + " or so");
            return;
        }
        if (!frequency_is_told(*tone)) return;
        for (int channel = 1; channel <= plan_.signal.channels; ++channel) {
            if (is_driven(case_, channel) && !channel_is_told(*tone, channel)) return;
        }
    }

private:
    void refuse(const std::string& problem, const std::string& remedy) const {
        refusals_.push_back(
            {asked_.position, "a rule of kind \"tone\" in case \"" + case_.name + "\", " + problem, remedy});
    }
    double hz(double cycles_per_sample) const { return cycles_per_sample * returned_rate_hz(plan_, case_); }
    std::string at_channel(int channel) const {
        return plan_.signal.channels == 1 ? "" : " on channel " + std::to_string(channel);
    }

    bool frequency_is_told(double tone) const {
        const double half_hz = returned_rate_hz(plan_, case_) / 2.0;
        if (tone > 0.5) {
            refuse("whose sine of " + brief(hz(tone)) + " Hz lies above half the rate of the output, " +
                       brief(half_hz) + " Hz, and comes through at another frequency",
                   "give it a frequency_hz below " + brief(half_hz));
            return false;
        }
        if (!(tone_samples_needed(rule_, tone) <= static_cast<double>(tone_most_samples))) {
            refuse("whose sine of " + brief(hz(tone)) + " Hz is not told from 0 Hz or half the rate, " +
                       brief(half_hz) + " Hz, in a record of " + std::to_string(tone_most_samples) + " samples",
                   "give it a frequency_hz farther from either");
            return false;
        }
        return true;
    }

    bool channel_is_told(double tone, int channel) const {
        const FilterChain chain = chain_of(plan_, case_, channel);
        const auto window = tone_window(plan_, case_, channel, expected_lag_of(case_));
        if (!window) {
            refuse("whose filter" + at_channel(channel) + " takes more than " +
                       std::to_string(longest_settling_samples) + " samples to settle on a sine",
                   "leave the rule out; rules about error, exact and unchanged hold");
            return false;
        }
        const auto needed = static_cast<std::int64_t>(tone_samples_needed(rule_, tone));
        if (window->samples() < needed) {
            refuse("whose filter" + at_channel(channel) + " has settled on the sine after " +
                       std::to_string(window->begin) + " returned samples, of " + std::to_string(window->end) +
                       ", and the figures take another " + std::to_string(needed),
                   "give it a length_samples of at least " +
                       std::to_string(rates_.sent_for(window->begin + needed + std::max(-expected_lag_of(case_), 0))));
            return false;
        }
        if (is_linear(chain)) {
            const double gain = std::abs(response_at(chain, tone * returned_per_sent(plan_, case_)));
            const double largest =
                gain * full_scale_value(plan_.signal.input) * std::fabs(plan_.signal.output_per_input);
            if (!(largest >= finest_step(plan_.signal.output))) {
                refuse("whose filter" + at_channel(channel) + " leaves nothing of a sine of " + brief(hz(tone)) + " Hz",
                       "give it a frequency_hz that the filter lets through");
                return false;
            }
        }
        if (!rule_.max_thd_db) return true;
        const auto harmonics =
            folded_harmonics(tone, rule_.highest_harmonic, static_cast<std::size_t>(window->samples()));
        if (std::any_of(harmonics.begin(), harmonics.end(),
                        [](const Harmonic& harmonic) { return harmonic.place == HarmonicPlace::own; }))
            return true;
        refuse("whose sine of " + brief(hz(tone)) + " Hz has no harmonic up to order " +
                   std::to_string(rule_.highest_harmonic) + " at a frequency of its own",
               "give it another frequency_hz, or leave max_thd_db out");
        return false;
    }

    const ToneRule& rule_;
    const Rule& asked_;
    const Plan& plan_;
    const Case& case_;
    CaseRates rates_;
    std::vector<Refusal>& refusals_;
};

}  // namespace

void check(const ToneRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals) {
    ToneCheck(rule, asked, plan, the_case, refusals).all();
}

}  // namespace halflsb
