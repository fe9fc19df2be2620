// In which order a file holds the coefficients of a section. Private to this room.
#pragma once

#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "oracle/filters/coefficient_file.hpp"
#include "oracle/filters/filter.hpp"

namespace halflsb {

/// The names of one group: b0 b1 b2 a0 a1 a2, 0 and -.
using SectionLayout = std::vector<std::string>;

inline constexpr std::string_view default_layout = "b0 b1 b2 a1 a2", layout_with_a0 = "b0 b1 b2 a0 a1 a2";

/// Words between blanks; nullopt unless each is known, b0 is there and none but 0 and - twice.
std::optional<SectionLayout> section_layout(std::string_view text);

/// The layout that the plan, the names of the columns or the length of the rows say, or why there is none.
std::variant<SectionLayout, FileProblem> layout_of(const CoefficientTable& table, const FileWords& words);

/// One group of scaled numbers as a section with subtracted feedback; what stands at 0, - and a0 is not looked at.
BiquadSection section_of(const SectionLayout& layout, std::span<const double> group, bool is_added);

}  // namespace halflsb
