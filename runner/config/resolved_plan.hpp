// A plan as it is understood: what it includes joined, [case.each] expanded, every default written out. One text
// without includes, to read and to compare; read back it is the same plan, and printed again the same text.
#pragma once

#include <string>
#include <variant>

#include "runner/config/plan_file.hpp"

namespace halflsb {

/// Of many cases the text may be larger than what a plan file may be; then it is for people only.
/// Files that the plan names stay named; they are taken from the same root. A default is written out where the
/// table takes it beside what is given: not level_ratio, for example, where the plan gives level_codes.
std::variant<std::string, ReadProblems> resolved_plan(const std::string& path, const Files& files,
                                                      const PlanOptions& options = {});

}  // namespace halflsb
