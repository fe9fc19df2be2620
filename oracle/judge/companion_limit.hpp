// How far a companion's response may lie from what follows from its base's, by the declared arithmetic alone.
#pragma once

#include <optional>

#include "oracle/judge/plan.hpp"

namespace halflsb {

/// As a value of the output. Each response is off its linear design by an error e within the ends lo .. hi that the
/// arithmetic sets (derived_limits.hpp), so
///     e' - sum_i gain_i e_i  lies within  lo + sum_i min(-gain_i lo, -gain_i hi)  ..  hi + sum_i max(...).
/// The larger of both sizes; with ends of equal size B it is B (1 + sum |gain_i|). Holds while no word reaches a rail.
/// nullopt where the filter or its arithmetic is not known.
std::optional<double> derived_companion_limit(const Plan& plan, const Case& companion, int channel);

}  // namespace halflsb
