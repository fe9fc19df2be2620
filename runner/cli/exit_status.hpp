// What the program's exit status says: computed here and nowhere else, from what the run came to.
// docs/exit-status.md is made from the table.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "runner/world/comparison.hpp"
#include "runner/world/explanation.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

struct ExitStatus {
    int number = 0;
    std::string_view meaning;
    std::vector<std::string_view> causes;  ///< concrete ones, a sentence's part each
    std::string_view advice;
};

/// Every status, ascending.
const std::vector<ExitStatus>& exit_statuses();

/// Of a run, finished or not. In this order: 130 when it was interrupted, 73, 70, 65 or 64 when an
/// error of that kind ended it; then 1 outranks 3 outranks 2 outranks 0. Cases that did not run though
/// nothing ended the run are our own defect: never a pass.
int exit_status_of(const RunResult& run);

/// Of captures that were judged again: 1 outranks 3 outranks 2 outranks 0 as above. What had ended the run while it was
/// captured is no interruption of the judging: cases that were never captured are the bench's.
int exit_status_of_judgement(const RunResult& run);

/// Of an explanation: 2 where the captures do not decide what explains some channel.
int exit_status_of(const Explanation& explanation);

/// Of two runs side by side: 1 where a response differs.
int exit_status_of(const Comparison& comparison);

/// Of several runs in one call, from that of each: 130, 73, 70, 65 and 64 before 1, then 3, 2, 0.
int exit_status_of_all(const std::vector<int>& statuses);
/// A run that ended so ends the whole call: nothing after it could be kept, or the person wants to stop.
bool stops_everything(int exit_status);

/// Of an error that came before or instead of a run.
int exit_status_of(const Error& error);

/// The table of docs/exit-status.md, in Markdown.
std::string exit_status_reference();

}  // namespace halflsb
