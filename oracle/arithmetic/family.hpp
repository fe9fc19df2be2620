// Kinds of filter that are computed alike, and the words of an arithmetic that each has. Private to this room.
#pragma once

#include <string_view>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

enum class Family { fir, average, one_pole, comb, sections, recursion, median, cic };

Family family_of(const FilterStage& stage);
/// "a fir", "a moving average", "a cascade of sections"
std::string_view text_of(Family family);
/// The first one is that of a stage that says none. A median and a CIC have one that needs no name.
const std::vector<Structure>& structures_of(Family family);
/// The structure that the stage says, or the first of its family where it says none of them.
Structure structure_of(const FilterStage& stage);
/// A one-pole that a firmware computes with a shift has 1 for its coefficient.
bool is_by_shift(const FilterStage& stage);

}  // namespace halflsb
