// Exact figures against their limits, and what derived limits leave out.
//
// They are held against their limits after rounding, so that limit, margin and verdict agree.
#pragma once

#include <cstdint>
#include <string>

#include "oracle/arithmetic/rail_watch.hpp"
#include "oracle/judge/verdict.hpp"
#include "oracle/measure/error.hpp"

namespace halflsb {

JudgedFigure at_most(std::string name, double value, double limit, std::string unit);
/// Errors against what each sign may come to: told is the one with the least room, and its end as the limit.
JudgedFigure within(std::string name, const ErrorEnds& found, const ErrorEnds& limits, std::string unit);
/// Where derived limits say nothing, and which word stands in their way.
std::string exempt_text(std::int64_t exempt, const RailWatch* rails);

}  // namespace halflsb
