// What a person reads of a run, as text: before the first sample, after each case, at the end.
//
// Pure functions from the result to text; nothing here prints. Text that came from a plan or a board
// is escaped (runner/world/printable.hpp). Each function's text ends in a line break.
#pragma once

#include <optional>
#include <string>
#include <string_view>

#include "runner/report/text_style.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

/// Before the board is touched: version, plan, rig, port.
std::string start_text(const RunResult& run, const TextStyle& style);

/// After the greeting, before the first sample: which board and firmware, where samples go in and
/// what that cannot show, formats, cases, time on the wire (`wire_s`, where baud has a meaning).
std::string board_text(const RunResult& run, std::optional<double> wire_s, const TextStyle& style);

/// run.cases[index]: one line, and below it whatever a reader of a case that did not pass needs.
std::string case_text(const RunResult& run, std::size_t index, const TextStyle& style);

/// The last lines: counts, what was not verified, the run's folder, what the report is not.
std::string summary_text(const RunResult& run, const TextStyle& style);

/// An error of any kind: place, problem, remedy.
std::string error_text(const Error& error, const TextStyle& style);

/// For the first use of a rig.
std::string cautions_text(const TextStyle& style);

/// What samples that enter at this point of the firmware cannot show, as a clause: "call" gives "not
/// seen there: the sampling interrupt, DMA, the converter and the analogue path".
std::string not_seen_from(std::string_view injection);

}  // namespace halflsb
