// Stimuli inside a stimulus: the parts of a sequence, and what is added to a shape. Each is a table with its own
// shape, written in braces or under a header [[case.stimulus.parts]].
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <string_view>
#include <vector>

#include "runner/config/reader.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// What is added to a shape may leave its length out: it then has that of the shape.
inline constexpr std::string_view added_stimuli_word = "add";
inline constexpr std::string_view length_word = "length_samples";

/// `array` is of kind array, the value of the parameter `name`. nullopt after a report.
std::optional<std::shared_ptr<const std::vector<StimulusWords>>> read_nested_stimuli(std::string_view name,
                                                                                     const TomlValue& array,
                                                                                     ReadContext& context,
                                                                                     const TableReader* owner);

/// --seed: takes the place of the seed of every stimulus that has one, those inside included.
void set_seeds(const Recipe& recipe, ParameterValues& values, std::uint64_t seed);

}  // namespace halflsb
