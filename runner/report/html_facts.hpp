// The facts of a run as parts of the page: what was tested with what, from which files, and what that cannot show.
#pragma once

#include <string>

#include "runner/world/result.hpp"

namespace halflsb {

/// The run's verdict in a word: "fail", "invalid" (something was not captured), "undecided", "pass". One that ended
/// early never passes.
std::string run_word(const RunResult& run);

/// The top of the page: verdict, counts, what was not verified, what ended it early.
std::string head_html(const RunResult& run);

/// Board, firmware, wire, files with their hashes. `judged_by` is the version of halflsb that judged the captures
/// again;
/// "" of a run as it happened.
std::string facts_html(const RunResult& run, const std::string& judged_by);

/// Cautions, and the isolation that the rig states.
std::string cautions_html();

/// The plan's own text, its lines numbered.
std::string plan_html(const RunResult& run, const std::string& text);

}  // namespace halflsb
