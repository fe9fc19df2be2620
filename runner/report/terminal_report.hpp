// What a person reads of a run, as text: before the first sample, after each case, at the end.
//
// Pure functions from the result to text; nothing here prints. Text that came from a plan or a board
// is escaped (runner/world/printable.hpp). Each function's text ends in a line break.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <utility>
#include <vector>

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

/// What stands at the end of a case's line: of a passed one its tightest figures, else the rules to blame.
std::string brief_of(const CaseResult& result);

/// The signal as the case had it, at the rate of its response: for times and indices.
Signal signal_of(const RunResult& run, const CaseResult& result);

/// How a case was captured, where that is not as usual: start state, settings, rate, attempts, each with its key.
std::vector<std::pair<std::string, std::string>> capture_facts(const RunResult& run, const CaseResult& result);

/// How the samples of a case travelled.
std::string stream_text(const CaseResult& result);

/// The board's build-id, and whether it is that of the image.
std::string firmware_text(const RunResult& run);

/// The last lines: counts, what was not verified, the run's folder, what the report is not.
std::string summary_text(const RunResult& run, const TextStyle& style);

/// In place of start_text and board_text, of a run whose captures are judged again: which run, and what it was
/// captured from. `written_by` is the version of halflsb that captured it, `own_plan` says whether the plan is its own.
std::string judged_text(const RunResult& run, const std::string& written_by, bool own_plan, const TextStyle& style);

/// One rig of several.
struct RunOfRig {
    std::string rig_file;
    Counts counts;
    std::string folder;
    std::optional<int> exit_status;  ///< none: it did not run
};
/// The last lines of a call with several rigs.
std::string rigs_text(const std::vector<RunOfRig>& runs, const TextStyle& style);

/// An error of any kind: place, problem, remedy.
std::string error_text(const Error& error, const TextStyle& style);

/// For the first use of a rig.
std::string cautions_text(const TextStyle& style);

/// What samples that enter at this point of the firmware cannot show, as a clause: "call" gives "not
/// seen there: the sampling interrupt, DMA, the converter and the analogue path".
std::string not_seen_from(std::string_view injection);

}  // namespace halflsb
