// Two runs side by side, for people.
#pragma once

#include <string>

#include "runner/report/text_style.hpp"
#include "runner/world/comparison.hpp"

namespace halflsb {

std::string comparison_text(const Comparison& comparison, const TextStyle& style);

}  // namespace halflsb
