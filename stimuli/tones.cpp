// Sine and multitone: lines at given frequencies, their phases exact at any index.
#include <algorithm>
#include <cmath>

#include "stimuli/exact_math.hpp"
#include "stimuli/philox.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_tones = 1000;

/// sin(2 pi (start + n turns_per_sample)); start and step exact to 2^-128 and 2^-127.
struct Tone {
    Wide turns_per_sample;
    TurnFraction start = 0;

    double at(std::int64_t own_index) const {
        const auto count = static_cast<Uint128>(static_cast<std::uint64_t>(own_index));
        return sine_of_turns(start + phase_after(turns_per_sample, count));
    }
};

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
        for (double& ratio : ratios) ratio = placement().level_ratio * tone_.at(first_own_index++);
    }

    Tone tone_;
    double cycles_per_sample_;
};

StimulusOutcome make_sine(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context, LevelSign::positive);
    if (!placement) return placement.error();
    const double frequency_hz = values.number(recipe, "frequency_hz").value_or(0.0);
    if (auto error = frequency_error("frequency_hz", frequency_hz, context.rate_hz)) return *error;
    const double phase_turns = values.number(recipe, "phase_turns").value_or(0.0);
    TurnFraction start = phase_after(wide(std::abs(phase_turns)), 1);
    if (phase_turns < 0.0) start = 0 - start;
    if (frequency_hz == context.rate_hz / 2.0 && sine_of_turns(start) == 0.0) {
        return refused("phase_turns",
                       number_text(phase_turns) + " makes a sine at Nyquist, " + number_text(frequency_hz) +
                           " Hz, zero in every sample",
                       "Give phase_turns = 0.25, or a lower frequency.");
    }
    const Tone tone{wide(frequency_hz) / wide(context.rate_hz), start};
    return std::unique_ptr<const Stimulus>(std::make_unique<Sine>(*placement, tone, frequency_hz / context.rate_hz));
}

class Multitone final : public PlacedStimulus {
public:
    Multitone(const Placement& placement, std::vector<Tone> tones, Spectrum spectrum)
        : PlacedStimulus(placement), tones_(std::move(tones)), spectrum_(std::move(spectrum)) {}
    Spectrum spectrum() const override { return spectrum_; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        const auto count = static_cast<double>(tones_.size());
        for (double& ratio : ratios) {
            double sum = 0.0;  // never above `count`: whole numbers that small are exact, and rounding keeps order
            for (const Tone& tone : tones_) sum += tone.at(first_own_index);
            ratio = placement().level_ratio * (sum / count);
            ++first_own_index;
        }
    }

    std::vector<Tone> tones_;
    Spectrum spectrum_;
};

StimulusOutcome make_multitone(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context, LevelSign::positive);
    if (!placement) return placement.error();
    const std::vector<double> frequencies_hz = values.numbers("frequencies_hz");
    if (frequencies_hz.size() > most_tones) {
        return refused("frequencies_hz", std::to_string(frequencies_hz.size()) + " tones are too many",
                       "Give at most " + std::to_string(most_tones) + ".");
    }
    Spectrum spectrum;
    std::vector<Tone> tones;
    const std::uint64_t seed = seed_of(recipe, values);
    for (const double frequency_hz : frequencies_hz) {
        if (auto error = frequency_error("frequencies_hz", frequency_hz, context.rate_hz)) return *error;
        const TurnFraction start = Uint128{random_bits(seed, RandomPurpose::phases, tones.size())} << 64;
        tones.push_back({wide(frequency_hz) / wide(context.rate_hz), start});
        spectrum.tones.push_back(frequency_hz / context.rate_hz);
    }
    std::vector<double> sorted_hz = frequencies_hz;
    std::sort(sorted_hz.begin(), sorted_hz.end());
    if (const auto twice = std::adjacent_find(sorted_hz.begin(), sorted_hz.end()); twice != sorted_hz.end()) {
        return refused("frequencies_hz", number_text(*twice) + " Hz stands there twice", "Give each frequency once.");
    }
    std::sort(spectrum.tones.begin(), spectrum.tones.end());
    return std::unique_ptr<const Stimulus>(
        std::make_unique<Multitone>(*placement, std::move(tones), std::move(spectrum)));
}

}  // namespace

Shape sine_shape() {
    std::vector<Parameter> parameters = {
        {.name = "frequency_hz",
         .type = ParameterType::real,
         .unit = "Hz",
         .minimum = 0.0,
         .required = true,
         .help = "Frequency, above 0 and not above Nyquist."},
        {.name = "phase_turns",
         .type = ParameterType::real,
         .unit = "turns",
         .minimum = -1.0,
         .maximum = 1.0,
         .default_value = 0.0,
         .help = "Phase at at_samples; 0.25 makes it a cosine."},
    };
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
         .required = true,
         .help = "1 to 1000 different frequencies, each above 0 and not above Nyquist."},
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
