// Whether values fit a recipe's table. A plan's reader checks the same with file positions; this is
// for everyone else, so that a maker can rely on the table whoever calls it.
#pragma once

#include <optional>
#include <string_view>

#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// How deep lists of stimuli may stand in each other, and how many stimuli one may hold in all.
inline constexpr int deepest_nesting = 4;
inline constexpr int most_nested_stimuli = 1000;

/// The first misfit: an unknown or missing name, a wrong type, a number out of range or not finite, an
/// unknown choice, an empty array. The place is the parameter's name, the kind is input. Stimuli inside
/// are looked through too, at places like "parts[2].level_ratio" or "add[1].shape", counted from 1; in the
/// list `add` length_samples may be left out.
std::optional<Error> misfit_of(const Recipe& recipe, const ParameterValues& values);

/// For a shape that stimulus_recipes() does not have; its place is "shape".
Error unknown_shape_error(std::string_view shape);

}  // namespace halflsb
