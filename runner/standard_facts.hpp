// What a run has to say of the cases and the arithmetic that its plan did not give.
#pragma once

#include <cstddef>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

/// `selected` and `left_out` are indices of the plan's cases. The arithmetic is told where a limit is derived from it.
TakenByItself taken_by_itself(const Plan& plan, const std::vector<std::size_t>& selected,
                              const std::vector<std::size_t>& left_out, const std::string& why_left_out);

}  // namespace halflsb
