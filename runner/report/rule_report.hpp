// One judged rule as text: each figure against its limit, and where a failure first shows, in codes.
#pragma once

#include <string>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/verdict.hpp"
#include "runner/report/text_style.hpp"

namespace halflsb {

/// "error", "error, channel 2".
std::string rule_title(const RuleVerdict& verdict);

/// The rule's tightest figure on part of a line: "max 0.499 LSB of 0.5", "latency 0 samples"; "" when
/// it has no figure.
std::string rule_brief(const RuleVerdict& verdict);

/// The rule in full: kind, reference, place in the plan, figures, reason, first bad sample with its
/// neighbours. `signal` gives the times and tells whether there are LSBs. Ends in a line break.
std::string rule_block(const RuleVerdict& verdict, const Signal& signal, const TextStyle& style);

/// The neighbours as a table, reference and error in LSB (in values for f32); the bad sample's line is
/// marked ">". `indent` blanks lead each line.
std::string neighbour_table(const Neighbourhood& around, const Signal& signal, const TextStyle& style,
                            std::size_t indent);

}  // namespace halflsb
