// An arithmetic as a plan writes it.
#pragma once

#include <string>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// Lines of [arithmetic], "rounding = \"floor\"" and so on, in the order of docs/plan.md: what is said and is not as it
/// would be when left out. Words that the stage has no use for are left out.
std::vector<std::string> said_words(const FilterStage& stage);

}  // namespace halflsb
