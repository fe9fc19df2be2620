// A sine: one line, its phase exact at any index.
#include "stimuli/exact_math.hpp"
#include "stimuli/realisations.hpp"

namespace halflsb {

namespace {

class Sine final : public PlacedStimulus {
public:
    Sine(const Placement& placement, const RealisedTone& tone, const Realisations& realisations,
         double cycles_per_sample)
        : PlacedStimulus(placement), tone_(tone), realisations_(realisations), cycles_per_sample_(cycles_per_sample) {}
    Spectrum spectrum() const override {
        return {.tones = {cycles_per_sample_},
                .realisations = in_spectrum(realisations_, placement()),
                .steady_from_sample = steady_from(realisations_, placement())};
    }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        const auto fill_part = [&](std::int64_t realisation, std::int64_t index, std::span<double> part) {
            // Adding the step is the same integer as multiplying it, so any start gives the same phase.
            const Tone tone = tone_.in(realisation);
            TurnFraction phase = tone.phase_at(index);
            for (double& ratio : part) {
                ratio = placement().level_ratio * sine_of_turns(phase);
                phase += tone.step;
            }
        };
        realisations_.for_each_part(first_own_index, ratios, fill_part);
    }

    RealisedTone tone_;
    Realisations realisations_;
    double cycles_per_sample_;
};

StimulusOutcome make_sine(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    const auto tone = tone_from(recipe, values, context);
    if (!tone) return tone.error();
    const auto realisations = realisations_of(recipe, values, *placement);
    if (!realisations) return realisations.error();
    const double frequency_hz = values.number(recipe, "frequency_hz").value_or(0.0);
    const RealisedTone realised(*tone, frequency_hz, seed_of(recipe, values));
    return std::unique_ptr<const Stimulus>(
        std::make_unique<Sine>(*placement, realised, *realisations, frequency_hz / context.rate_hz));
}

}  // namespace

Shape sine_shape() {
    std::vector<Parameter> parameters =
        tone_parameters("Phase at at_samples, in the first realisation; 0.25 makes it a cosine.");
    const auto placement = placement_parameters(LevelSign::positive, 0.5, "Peak of the sine.");
    parameters.insert(parameters.end(), placement.begin(), placement.end());
    parameters.push_back(realisations_parameter());
    parameters.push_back(seed_parameter("Draws the phases of the realisations after the first."));
    return {{.name = "sine", .help = "One sine from at_samples on.", .parameters = std::move(parameters)}, make_sine};
}

}  // namespace halflsb
