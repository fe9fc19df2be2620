// The words of a plan that belong to no shape, filter or rule: their tables, for the reader, its messages
// and the reference in docs/plan.md.
#pragma once

#include "stimuli/parameter.hpp"

namespace halflsb {

const Recipe& plan_recipe();    ///< the top of the file
const Recipe& signal_recipe();  ///< [signal]
const Recipe& case_recipe();    ///< [[case]]

}  // namespace halflsb
