// The words of baseline.toml. Inside this room only.
#pragma once

#include "stimuli/parameter.hpp"

namespace halflsb {

const Recipe& baseline_recipe();       ///< the top; texts that may be empty and lists of texts are beside it
const Recipe& baseline_case_recipe();  ///< [[case]]

}  // namespace halflsb
