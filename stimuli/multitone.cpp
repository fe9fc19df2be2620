// A multitone: lines at given frequencies, their phases exact at any index.
#include <algorithm>

#include "stimuli/exact_math.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/philox.hpp"
#include "stimuli/realisations.hpp"

namespace halflsb {

namespace {

constexpr std::size_t most_tones = 1000;

class Multitone final : public PlacedStimulus {
public:
    Multitone(const Placement& placement, std::vector<RealisedTone> tones, const Realisations& realisations,
              Spectrum spectrum)
        : PlacedStimulus(placement),
          tones_(std::move(tones)),
          realisations_(realisations),
          spectrum_(std::move(spectrum)) {}
    Spectrum spectrum() const override { return spectrum_; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        const auto fill_part = [&](std::int64_t realisation, std::int64_t index, std::span<double> part) {
            // A tone at a time; each sample still sums its tones in their order. The sum never passes their
            // number: whole numbers that small are exact, and rounding keeps order.
            std::fill(part.begin(), part.end(), 0.0);
            for (const RealisedTone& realised : tones_) {
                const Tone tone = realised.in(realisation);
                TurnFraction phase = tone.phase_at(index);
                for (double& ratio : part) {
                    ratio += sine_of_turns(phase);
                    phase += tone.step;
                }
            }
        };
        realisations_.for_each_part(first_own_index, ratios, fill_part);
        const auto count = static_cast<double>(tones_.size());
        for (double& ratio : ratios) ratio = placement().level_ratio * (ratio / count);
    }

    std::vector<RealisedTone> tones_;
    Realisations realisations_;
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
    const auto realisations = realisations_of(recipe, values, *placement);
    if (!realisations) return realisations.error();
    Spectrum spectrum;
    spectrum.realisations = in_spectrum(*realisations, *placement);
    spectrum.steady_from_sample = steady_from(*realisations, *placement);
    std::vector<RealisedTone> tones;
    const std::uint64_t seed = seed_of(recipe, values);
    for (const double frequency_hz : frequencies_hz) {
        if (auto error = frequency_error("frequencies_hz", frequency_hz, context.rate_hz)) return *error;
        const TurnFraction start = Uint128{random_bits(seed, RandomPurpose::phases, tones.size())} << 64;
        tones.emplace_back(tone_of(frequency_hz, context.rate_hz, start), frequency_hz, seed);
        spectrum.tones.push_back(frequency_hz / context.rate_hz);
    }
    std::vector<double> sorted_hz = frequencies_hz;
    std::sort(sorted_hz.begin(), sorted_hz.end());
    if (const auto twice = std::adjacent_find(sorted_hz.begin(), sorted_hz.end()); twice != sorted_hz.end()) {
        return refused("frequencies_hz", number_text(*twice) + " Hz is there twice", "give each frequency once");
    }
    std::sort(spectrum.tones.begin(), spectrum.tones.end());
    return std::unique_ptr<const Stimulus>(
        std::make_unique<Multitone>(*placement, std::move(tones), *realisations, std::move(spectrum)));
}

}  // namespace

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
    parameters.push_back(realisations_parameter());
    parameters.push_back(seed_parameter("Draws the phases; another seed gives another crest."));
    return {{.name = "multitone",
             .help = "Sines of equal amplitude and random phases, summed.",
             .parameters = std::move(parameters)},
            make_multitone};
}

}  // namespace halflsb
