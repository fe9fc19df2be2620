// The table of all shapes, and how a name becomes a stimulus.
#include <cmath>

#include "stimuli/number_text.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

const std::vector<Shape>& shapes() {
    static const std::vector<Shape> all = {step_shape(),  impulse_shape(), chirp_shape(),
                                           noise_shape(), sine_shape(),    multitone_shape()};
    return all;
}

}  // namespace

const std::vector<Recipe>& stimulus_recipes() {
    static const std::vector<Recipe> recipes = [] {
        std::vector<Recipe> list;
        for (const Shape& shape : shapes()) list.push_back(shape.recipe);
        return list;
    }();
    return recipes;
}

StimulusOutcome make_stimulus(std::string_view shape, const ParameterValues& values, const StimulusContext& context) {
    if (!(context.rate_hz > 0.0 && std::isfinite(context.rate_hz))) {
        return refused("rate_hz", number_text(context.rate_hz) + " Hz is no sample rate",
                       "Give a finite rate above 0 Hz.");
    }
    std::string known;
    for (const Shape& candidate : shapes()) {
        const Recipe& recipe = candidate.recipe;
        if (recipe.name != shape) {
            known += (known.empty() ? "" : ", ") + std::string(recipe.name);
            continue;
        }
        if (auto error = misfit_of(recipe, values)) return *error;
        return candidate.make(recipe, values, context);
    }
    return refused("shape", "no stimulus is called \"" + std::string(shape) + "\"", "Shapes: " + known + ".");
}

}  // namespace halflsb
