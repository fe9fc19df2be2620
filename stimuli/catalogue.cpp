// The table of all shapes, and how a name becomes a stimulus.
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

const std::vector<Shape>& shapes() {
    static const std::vector<Shape> all = {step_shape(), impulse_shape(), noise_shape()};
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
    for (const Shape& candidate : shapes()) {
        if (candidate.recipe.name == shape) return candidate.make(candidate.recipe, values, context);
    }
    std::string known;
    for (const Shape& candidate : shapes()) known += (known.empty() ? "" : ", ") + std::string(candidate.recipe.name);
    return refused("shape", "no stimulus is called \"" + std::string(shape) + "\"", "Known shapes: " + known + ".");
}

}  // namespace halflsb
