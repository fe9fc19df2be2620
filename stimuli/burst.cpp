// Tone bursts: a sine for on_samples, silence for off_samples, and again; each begins at the same phase.
// Its lines are smeared by the gate, as wide as the bursts are short, so no spectrum is claimed.
#include <algorithm>

#include "stimuli/exact_math.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/tone_phase.hpp"

namespace halflsb {

namespace {

struct Gate {
    std::int64_t on_samples = 1, off_samples = 1;
    std::int64_t end = 0;  ///< own index from which on nothing comes any more

    std::int64_t cycle_samples() const { return on_samples + off_samples; }
};

class Burst final : public PlacedStimulus {
public:
    Burst(const Placement& placement, const Tone& tone, const Gate& gate)
        : PlacedStimulus(placement), tone_(tone), gate_(gate) {}
    Spectrum spectrum() const override { return {}; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        std::int64_t own_index = first_own_index;
        std::int64_t within = own_index % gate_.cycle_samples();
        TurnFraction phase = tone_.phase_at(within);
        for (double& ratio : ratios) {
            const bool is_on = within < gate_.on_samples && own_index < gate_.end;
            ratio = is_on ? placement().level_ratio * sine_of_turns(phase) : 0.0;
            phase += tone_.step;
            ++own_index;
            if (++within == gate_.cycle_samples()) {
                within = 0;
                phase = tone_.start;
            }
        }
    }

    Tone tone_;
    Gate gate_;
};

StimulusOutcome make_burst(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    const auto tone = tone_from(recipe, values, context);
    if (!tone) return tone.error();
    Gate gate;
    gate.on_samples = values.integer(recipe, "on_samples").value_or(1);
    gate.off_samples = values.integer(recipe, "off_samples").value_or(1);
    gate.end = placement->own_samples();
    // Their last sample must be sent: a burst that is cut short is not the burst that the plan describes.
    const std::int64_t repeats = values.integer(recipe, "repeats").value_or(1);
    const Uint128 needed =
        static_cast<Uint128>(static_cast<std::uint64_t>(gate.cycle_samples())) * static_cast<std::uint64_t>(repeats) -
        static_cast<std::uint64_t>(gate.off_samples);
    if (needed > static_cast<std::uint64_t>(placement->own_samples())) {
        return refused(values.has("repeats") ? "repeats" : "on_samples",
                       std::to_string(repeats) + (repeats == 1 ? " burst takes " : " bursts take ") +
                           number_text(static_cast<double>(needed)) + " samples, from at_samples on there are " +
                           std::to_string(placement->own_samples()),
                       "make the stimulus longer, or the bursts shorter or fewer");
    }
    if (values.has("repeats")) gate.end = static_cast<std::int64_t>(needed);
    return std::unique_ptr<const Stimulus>(std::make_unique<Burst>(*placement, *tone, gate));
}

}  // namespace

Shape burst_shape() {
    const auto longest = static_cast<double>(longest_stimulus_samples);
    std::vector<Parameter> parameters = tone_parameters("Phase at the start of each burst; 0.25 makes it a cosine.");
    for (const Parameter& parameter : {
             Parameter{.name = "on_samples",
            .type = ParameterType::integer,
            .unit = "samples",
            .minimum = 1.0,
            .maximum = longest,
            .required = true,
            .help = "Length of a burst."},
             Parameter{.name = "off_samples",
             .type = ParameterType::integer,
             .unit = "samples",
             .minimum = 1.0,
             .maximum = longest,
             .required = true,
             .help = "Silence between two bursts."},
             Parameter{.name = "repeats",
             .type = ParameterType::integer,
             .minimum = 1.0,
             .maximum = longest,
             .help = "Number of bursts; when left out they go on to the end, where one may be cut short."},
         }) {
        parameters.push_back(parameter);
    }
    const auto placement = placement_parameters(LevelSign::positive, 0.5, "Peak of the sine.");
    parameters.insert(parameters.end(), placement.begin(), placement.end());
    return {{.name = "burst",
             .help = "Bursts of a sine with silence between them, each from the same phase.",
             .parameters = std::move(parameters)},
            make_burst};
}

}  // namespace halflsb
