// Whether values fit a recipe's table. A plan's reader checks the same with file positions; this is
// for everyone else, so that a maker can rely on the table whoever calls it.
#pragma once

#include <optional>
#include <string>

#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// The first misfit: an unknown or missing name, a wrong type, a number out of range or not finite, an
/// unknown choice, an empty array. The place is the parameter's name, the kind is input.
std::optional<Error> misfit_of(const Recipe& recipe, const ParameterValues& values);

}  // namespace halflsb
