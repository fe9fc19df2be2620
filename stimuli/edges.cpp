// Step and impulse: a level from at_samples on, or in that one sample; and silence. Their spectrum
// has no power to estimate a response from: they are transients.
#include <algorithm>

#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

constexpr std::string_view edge_level_help =
    "Level of the signal, of either sign; 1 saturates at the top code, -1 is the lowest code.";

class Step final : public PlacedStimulus {
public:
    using PlacedStimulus::PlacedStimulus;
    Spectrum spectrum() const override { return {.steady_from_sample = placement().at_samples}; }

private:
    void fill_own(std::int64_t, std::span<double> ratios) const override {
        std::fill(ratios.begin(), ratios.end(), placement().level_ratio);
    }
};

class Impulse final : public PlacedStimulus {
public:
    using PlacedStimulus::PlacedStimulus;
    Spectrum spectrum() const override { return {.steady_from_sample = placement().at_samples + 1}; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        std::fill(ratios.begin(), ratios.end(), 0.0);
        if (first_own_index == 0) ratios[0] = placement().level_ratio;
    }
};

class Silence final : public PlacedStimulus {
public:
    using PlacedStimulus::PlacedStimulus;
    Spectrum spectrum() const override { return {.steady_from_sample = 0}; }

private:
    void fill_own(std::int64_t, std::span<double> ratios) const override {
        std::fill(ratios.begin(), ratios.end(), 0.0);
    }
};

StimulusOutcome make_silence(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = span_of(recipe, values, context);
    if (!placement) return placement.error();
    return std::unique_ptr<const Stimulus>(std::make_unique<Silence>(*placement));
}

template <class Edge>
StimulusOutcome make_edge(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    return std::unique_ptr<const Stimulus>(std::make_unique<Edge>(*placement));
}

}  // namespace

Shape step_shape() {
    return {{.name = "step",
             .help = "Silence, then a constant level from at_samples to the end.",
             .parameters = placement_parameters(LevelSign::any, 0.5, edge_level_help)},
            make_edge<Step>};
}

Shape impulse_shape() {
    return {{.name = "impulse",
             .help = "One sample at at_samples, silence before and after it.",
             .parameters = placement_parameters(LevelSign::any, 0.5, edge_level_help)},
            make_edge<Impulse>};
}

Shape silence_shape() {
    return {{.name = "silence",
             .help = "The code of zero all the time: a gap between the parts of a sequence, or for what is left alone.",
             .parameters = {length_parameter()}},
            make_silence};
}

}  // namespace halflsb
