// One judged rule as text: each figure against its limit, and where a failure first shows, in codes.
#pragma once

#include <string>
#include <vector>

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

/// Cells of a table of figures: "0.499 LSB", "1.2 ± 0.01 dB", or why there is no number; "≤ 0.5 LSB", "= 0 samples".
std::string measured_cell(const JudgedFigure& figure, const TextStyle& style);
std::string limit_cell(const JudgedFigure& figure, const Rule& rule, const TextStyle& style);
/// "0.001 LSB", or "none".
std::string margin_cell(const JudgedFigure& figure);
/// What it took, and what it would have taken without looking early; "" where nothing is told of it.
std::string evidence_text(const RuleVerdict& verdict);
/// Where the response first leaves its limits: "1041, at 867.50 ms".
std::string first_bad_text(const Neighbourhood& around, const Signal& signal);

/// The neighbours, a row each: index, time in ms, stimulus, response, reference and error, the last two in LSB (in
/// values for f32).
std::vector<std::vector<std::string>> neighbour_rows(const Neighbourhood& around, const Signal& signal);

/// The neighbours as a table, reference and error in LSB (in values for f32); the bad sample's line is
/// marked ">". `indent` blanks lead each line.
std::string neighbour_table(const Neighbourhood& around, const Signal& signal, const TextStyle& style,
                            std::size_t indent);

}  // namespace halflsb
