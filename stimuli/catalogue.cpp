// The table of all shapes, and how a name becomes a stimulus.
#include <cmath>

#include "stimuli/number_text.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

const std::vector<Shape>& shapes() {
    static const std::vector<Shape> all = [] {
        std::vector<Shape> list = {step_shape(),      impulse_shape(), silence_shape(), ramp_shape(),    square_shape(),
                                   signs_shape(),     chirp_shape(),   noise_shape(),   prbs_shape(),    sine_shape(),
                                   multitone_shape(), burst_shape(),   file_shape(),    sequence_shape()};
        for (Shape& shape : list) shape.recipe.parameters.push_back(add_parameter());
        return list;
    }();
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
                       "give a finite rate above 0 Hz");
    }
    const Recipe* recipe = find_recipe(stimulus_recipes(), shape);
    if (recipe == nullptr) return unknown_shape_error(shape);
    if (auto error = misfit_of(*recipe, values)) return *error;
    return make_fitting_stimulus(shape, values, context);
}

StimulusOutcome make_fitting_stimulus(std::string_view shape, const ParameterValues& values,
                                      const StimulusContext& context) {
    for (const Shape& candidate : shapes()) {
        if (candidate.recipe.name != shape) continue;
        auto stimulus = candidate.make(candidate.recipe, values, context);
        if (!stimulus || !values.has("add")) return stimulus;
        return make_sum(std::move(*stimulus), values.stimuli("add"), context);
    }
    return unknown_shape_error(shape);
}

bool is_explicit(std::string_view shape, const ParameterValues& values) {
    if (shape == "file") return true;
    for (const auto& [name, value] : values.all()) {
        for (const StimulusWords& inner : values.stimuli(name)) {
            if (is_explicit(inner.shape, inner.values)) return true;
        }
    }
    return false;
}

}  // namespace halflsb
