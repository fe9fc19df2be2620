// The commands of the program: each turns options into text on the terminal (or the one document of --json) and an exit
// status.
#pragma once

#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/cli/options.hpp"
#include "runner/cli/terminal.hpp"
#include "runner/config/problems.hpp"
#include "runner/config/rig.hpp"
#include "runner/record/json_answer.hpp"
#include "runner/report/text_style.hpp"
#include "runner/world/clock.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

/// What the commands share.
struct Desk {
    Terminal& terminal;
    Files& files;
    const Clock& clock;
    JsonAnswer* answer = nullptr;  ///< of --json: then no text for people is written
};

int check_command(const Options& options, const Desk& desk);
int list_command(const Options& options, const Desk& desk);  ///< check --list
int judge_command(const Options& options, const Desk& desk);
int explain_command(const Options& options, const Desk& desk);
int compare_command(const Options& options, const Desk& desk);
int accept_command(const Options& options, const Desk& desk);
int predict_command(const Options& options, const Desk& desk);
int ports_command(const Options& options, const Desk& desk);

/// Refuses a --log or a --html that would replace a plan, a rig, the image or a file of a run's folder; its report.html
/// may be replaced by --html.
Outcome<void> check_written_paths(const Options& options, const Files& files);

/// The style of a stream: colour, width and signs that it takes.
TextStyle style_of(const Terminal& terminal, Stream stream, ColourWish wish);
/// Text of a result, for people.
Outcome<void> say(const Desk& desk, std::string_view text);
/// An error, to standard error or into the answer; its exit status.
int tell(const Error& error, const Options& options, const Desk& desk);
/// All that is wrong with the files, likewise; the exit status of wrong files.
int tell_problems(const std::vector<std::string>& problems, const Desk& desk);
/// What the command line names.
struct PlanAndRigs {
    Plan plan;
    std::vector<Rig> rigs;  ///< in the order of the options
};
/// All files are read before anything is said or touched, so that all their problems are told at once.
std::variant<PlanAndRigs, ReadProblems> read_plan_and_rigs(const Options& options, const Desk& desk);
extern const char* const tool_version;

}  // namespace halflsb
