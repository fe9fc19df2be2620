// A rule that a case cannot answer: found on paper, before anything is streamed.
#pragma once

#include <string>
#include <vector>

#include "oracle/rules/plan_position.hpp"

namespace halflsb {

struct Refusal {
    PlanPosition position;
    std::string problem;
    std::string remedy;  ///< names a stimulus that would do, where there is one
};

}  // namespace halflsb
