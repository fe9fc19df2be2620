// Sine and multitone: lines at given frequencies, their phases exact at any index.
#include <algorithm>
#include <cmath>

#include "stimuli/exact_math.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/philox.hpp"
#include "stimuli/tone_phase.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_tones = 1000;

class Sine final : public PlacedStimulus {
public:
    Sine(const Placement& placement, const Tone& tone, double cycles_per_sample)
        : PlacedStimulus(placement), tone_(tone), cycles_per_sample_(cycles_per_sample) {}
    Spectrum spectrum() const override {
        Spectrum lines;
        lines.tones = {cycles_per_sample_};
        return lines;
    }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        // Adding the step is the same integer as multiplying it, so any start gives the same phase.
        TurnFraction phase = tone_.phase_at(first_own_index);
        for (double& ratio : ratios) {
            ratio = placement().level_ratio * sine_of_turns(phase);
            phase += tone_.step;
        }
    }

    Tone tone_;
    double cycles_per_sample_;
};

StimulusOutcome make_sine(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    const auto tone = tone_from(recipe, values, context);
    if (!tone) return tone.error();
    const double frequency_hz = values.number(recipe, "frequency_hz").value_or(0.0);
    return std::unique_ptr<const Stimulus>(std::make_unique<Sine>(*placement, *tone, frequency_hz / context.rate_hz));
}

class Multitone final : public PlacedStimulus {
public:
    Multitone(const Placement& placement, std::vector<Tone> tones, Spectrum spectrum)
        : PlacedStimulus(placement), tones_(std::move(tones)), spectrum_(std::move(spectrum)) {}
    Spectrum spectrum() const override { return spectrum_; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        // A tone at a time; each sample still sums its tones in their order. The sum never passes their
        // number: whole numbers that small are exact, and rounding keeps order.
        std::fill(ratios.begin(), ratios.end(), 0.0);
        for (const Tone& tone : tones_) {
            TurnFraction phase = tone.phase_at(first_own_index);
            for (double& ratio : ratios) {
                ratio += sine_of_turns(phase);
                phase += tone.step;
            }
        }
        const auto count = static_cast<double>(tones_.size());
        for (double& ratio : ratios) ratio = placement().level_ratio * (ratio / count);
    }

    std::vector<Tone> tones_;
    Spectrum spectrum_;
};

StimulusOutcome make_multitone(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    const std::vector<double> frequencies_hz = values.numbers("frequencies_hz");
    if (frequencies_hz.size() > most_tones) {
        return refused("frequencies_hz", std::to_string(frequencies_hz.size()) + " tones are too many",
                       "give at most " + std::to_string(most_tones));
    }
    Spectrum spectrum;
    std::vector<Tone> tones;
    const std::uint64_t seed = seed_of(recipe, values);
    for (const double frequency_hz : frequencies_hz) {
        if (auto error = frequency_error("frequencies_hz", frequency_hz, context.rate_hz)) return *error;
        const TurnFraction start = Uint128{random_bits(seed, RandomPurpose::phases, tones.size())} << 64;
        tones.push_back(tone_of(frequency_hz, context.rate_hz, start));
        spectrum.tones.push_back(frequency_hz / context.rate_hz);
    }
    std::vector<double> sorted_hz = frequencies_hz;
    std::sort(sorted_hz.begin(), sorted_hz.end());
    if (const auto twice = std::adjacent_find(sorted_hz.begin(), sorted_hz.end()); twice != sorted_hz.end()) {
        return refused("frequencies_hz", number_text(*twice) + " Hz is there twice", "give each frequency once");
    }
    std::sort(spectrum.tones.begin(), spectrum.tones.end());
    return std::unique_ptr<const Stimulus>(
        std::make_unique<Multitone>(*placement, std::move(tones), std::move(spectrum)));
}

}  // namespace

Tone tone_of(double frequency_hz, double rate_hz, TurnFraction start) {
    return {phase_after(wide(frequency_hz) / wide(rate_hz), 1), start};
}

std::vector<Parameter> tone_parameters(std::string_view phase_help) {
    return {
        {.name = "frequency_hz",
         .type = ParameterType::real,
         .unit = "Hz",
         .minimum = 0.0,
         .above_minimum = true,
         .required = true,
         .help = "Frequency, not above Nyquist."},
        {.name = "phase_turns",
         .type = ParameterType::real,
         .unit = "turns",
         .minimum = -1.0,
         .maximum = 1.0,
         .default_value = 0.0,
         .help = phase_help},
    };
}

Outcome<Tone> tone_from(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    const double frequency_hz = values.number(recipe, "frequency_hz").value_or(0.0);
    if (auto error = frequency_error("frequency_hz", frequency_hz, context.rate_hz)) return *error;
    const double phase_turns = values.number(recipe, "phase_turns").value_or(0.0);
    TurnFraction start = phase_after(wide(std::abs(phase_turns)), 1);
    if (phase_turns < 0.0) start = 0 - start;
    if (frequency_hz == context.rate_hz / 2.0 && sine_of_turns(start) == 0.0) {
        return refused("phase_turns",
                       "a sine of " + number_text(frequency_hz) +
                           " Hz, Nyquist, with phase_turns = " + number_text(phase_turns) + " is zero in every sample",
                       "give phase_turns = 0.25, or a lower frequency");
    }
    return tone_of(frequency_hz, context.rate_hz, start);
}

Shape sine_shape() {
    std::vector<Parameter> parameters = tone_parameters("Phase at at_samples; 0.25 makes it a cosine.");
    const auto placement = placement_parameters(LevelSign::positive, 0.5, "Peak of the sine.");
    parameters.insert(parameters.end(), placement.begin(), placement.end());
    return {{.name = "sine", .help = "One sine from at_samples on.", .parameters = std::move(parameters)}, make_sine};
}

Shape multitone_shape() {
    std::vector<Parameter> parameters = {
        {.name = "frequencies_hz",
         .type = ParameterType::reals,
         .unit = "Hz",
         .minimum = 0.0,
         .above_minimum = true,
         .required = true,
         .help = "1 to 1000 different frequencies, none above Nyquist."},
    };
    const auto placement = placement_parameters(
        LevelSign::positive, 0.5, "Bound of the peak: each tone has this level divided by the number of tones.");
    parameters.insert(parameters.end(), placement.begin(), placement.end());
    parameters.push_back(seed_parameter("Draws the phases; another seed gives another crest."));
    return {{.name = "multitone",
             .help = "Sines of equal amplitude and random phases, summed.",
             .parameters = std::move(parameters)},
            make_multitone};
}

}  // namespace halflsb
