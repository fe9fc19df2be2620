// The bands of a response rule: rows {from_hz, to_hz, min_db or -inf, max_db or +inf}, each checked
// against itself, Nyquist and the others, with the place of the band that is wrong.
#pragma once

#include <optional>
#include <vector>

#include "runner/config/reader.hpp"

namespace halflsb {

/// The words of one band.
const Recipe& band_recipe();

/// `array` is of kind array. nullopt after a report.
std::optional<std::vector<std::vector<double>>> read_bands(const TomlValue& array, ReadContext& context);

}  // namespace halflsb
