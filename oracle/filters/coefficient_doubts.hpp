// What a file of coefficients cannot be, and what it looks like instead. Private to this room.
#pragma once

#include <optional>
#include <vector>

#include "oracle/filters/coefficient_file.hpp"

namespace halflsb {

/// Taps that carry their energy late and are not symmetric, where the plan does not say their order. A filter may be so
/// (a delay), so one word settles it; but signal libraries store taps oldest first, and then this is how they look:
/// the centre of sum h[k]^2 lies behind the middle by more than a tenth of the length and half a tap.
std::optional<FileProblem> doubt_about_taps(const FileCoefficients& file, const FileWords& words);

/// An unstable section, and which other words would make all sections stable: the feedback turned round, the
/// denominator in front. `scaled` are the numbers in the order of the file.
std::optional<FileProblem> doubt_about_sections(const FileCoefficients& file, const std::vector<double>& scaled,
                                                const FileWords& words);

}  // namespace halflsb
