#include "runner/cli/exit_status.hpp"

#include <algorithm>

namespace halflsb {

namespace {

constexpr int passed = 0;
constexpr int rule_failed = 1;
constexpr int undecided = 2;
constexpr int bench = 3;
constexpr int usage = 64;   // EX_USAGE of BSD sysexits
constexpr int input = 65;   // EX_DATAERR
constexpr int defect = 70;  // EX_SOFTWARE
constexpr int output = 73;  // EX_CANTCREAT
constexpr int interrupted = 130;

}  // namespace

const std::vector<ExitStatus>& exit_statuses() {
    static const std::vector<ExitStatus> table = {
        {passed,
         "every rule of every selected case passed",
         {"all cases ran and passed", "explain: what the board does is found, to the bit",
          "compare: all responses are the same"},
         "nothing to do"},
        {rule_failed,
         "a rule failed on a valid capture",
         {"the response differs from the reference by more than a limit", "the latency is not the expected one",
          "the gain leaves its band", "a response is not the accepted one", "compare: a response is not what it was"},
         "the report shows the figure, the first bad sample and the command that repeats the case"},
        {undecided,
         "a rule could not be decided, none failed",
         {"the response fits the reference at no lag", "the stimulus has no power where a rule asks",
          "there is no baseline yet that unchanged could compare with",
          "explain: nothing reproduces the captures, or more than one cause does"},
         "the report says what was missing; choose a stimulus that tells"},
        {bench,
         "the bench: something could not be captured, no rule failed",
         {"no such port, no permission, or the port is busy",
          "the board is silent or its greeting disagrees with the plan", "the board's build-id is not that of --image",
          "a command of the rig failed", "samples were lost or the board was unplugged",
          "judge: a selected case has no capture"},
         "the message says what was awaited, for how long, and what came instead; nothing is said about the filter"},
        {usage,
         "the command line is wrong",
         {"an unknown command or option", "a value that is missing or out of range",
          "--case or --label selects no case"},
         "halflsb --help"},
        {input,
         "a file is wrong, the board untouched",
         {"a plan or rig that is missing, too large or no TOML", "an unknown key, a wrong type, a value out of range",
          "isolated is not true in the rig", "a file outside the root", "an --image without a build-id",
          "a run folder that is incomplete, edited, of another version or not one of ours",
          "accept: a run that is no baseline", "compare: runs that have no case in common"},
         "the message names file, line and column and what to write instead"},
        {defect,
         "a defect of halflsb itself",
         {"a state that cannot be", "cases that did not run though nothing stopped the run"},
         "report it with the run folder and a --log file"},
        {output,
         "a result cannot be written",
         {"the output folder is not writable or not empty", "the disk is full", "the --log file cannot be opened",
          "standard output cannot be written (a reader that closed the pipe is no error)"},
         "choose another folder with --out, or free some space"},
        {interrupted,
         "interrupted by INT, TERM or HUP",
         {"Ctrl-C", "the end of a time limit of the job", "the terminal was closed"},
         "finished cases are kept in the run folder; this status is given even when one of them failed, because the "
         "run is not whole"},
    };
    return table;
}

int exit_status_of(const Explanation& explanation) {
    const auto is_told = [](const ExplainedChannels& one) {
        return one.finding.kind == FindingKind::as_declared || one.finding.kind == FindingKind::found;
    };
    const auto& channels = explanation.channels;
    return !channels.empty() && std::all_of(channels.begin(), channels.end(), is_told) ? passed : undecided;
}

int exit_status_of(const Comparison& comparison) { return comparison.differs() ? rule_failed : passed; }

int exit_status_of(const Error& error) {
    switch (error.kind) {
        case ErrorKind::usage:
            return usage;
        case ErrorKind::input:
            return input;
        case ErrorKind::bench:
            return bench;
        case ErrorKind::output:
            return output;
        case ErrorKind::interrupted:
            return interrupted;
        case ErrorKind::defect:
            break;
    }
    return defect;
}

int exit_status_of(const RunResult& run) {
    if (run.ended_by && run.ended_by->kind != ErrorKind::bench) return exit_status_of(*run.ended_by);
    const Counts counts = run.counts();
    if (counts.fail > 0) return rule_failed;
    if (run.ended_by || counts.invalid > 0) return bench;
    if (counts.not_run > 0) return defect;
    if (counts.undecided > 0) return undecided;
    return counts.pass > 0 ? passed : usage;  // no case was selected
}

int exit_status_of_judgement(const RunResult& run) {
    const Counts counts = run.counts();
    if (counts.fail > 0) return rule_failed;
    if (run.ended_by || counts.invalid > 0 || counts.not_run > 0) return bench;
    if (counts.undecided > 0) return undecided;
    return counts.pass > 0 ? passed : usage;  // no case was selected
}

int exit_status_of_all(const std::vector<int>& statuses) {
    for (const int status : {interrupted, output, defect, input, usage, rule_failed, bench, undecided}) {
        if (std::find(statuses.begin(), statuses.end(), status) != statuses.end()) return status;
    }
    return statuses.empty() ? defect : passed;
}

bool stops_everything(int exit_status) {
    return exit_status == interrupted || exit_status == output || exit_status == defect;
}

std::string exit_status_reference() {
    std::string out = "| status | meaning | what causes it | what to do |\n|---|---|---|---|\n";
    for (const ExitStatus& status : exit_statuses()) {
        out += "| " + std::to_string(status.number) + " | " + std::string(status.meaning) + " | ";
        for (std::size_t i = 0; i < status.causes.size(); ++i)
            out += (i > 0 ? "; " : "") + std::string(status.causes[i]);
        out += " | " + std::string(status.advice) + " |\n";
    }
    return out;
}

}  // namespace halflsb
