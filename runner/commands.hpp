// The commands of the program: each turns options into text on the terminal and an exit status.
#pragma once

#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/cli/options.hpp"
#include "runner/cli/terminal.hpp"
#include "runner/report/text_style.hpp"
#include "runner/world/clock.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

/// What the commands share.
struct Desk {
    Terminal& terminal;
    Files& files;
    const Clock& clock;
};

int check_command(const Options& options, const Desk& desk);
int predict_command(const Options& options, const Desk& desk);
int ports_command(const Desk& desk);

/// Refuses a --log that would replace the plan, the rig or the image.
Outcome<void> check_log_path(const Options& options, const Files& files);

/// The style of a stream: colour, width and signs that it takes.
TextStyle style_of(const Terminal& terminal, Stream stream, ColourWish wish);
/// An error to standard error; its exit status.
int tell(const Error& error, const Options& options, const Desk& desk);
/// All that is wrong with the files, to standard error; the exit status of wrong files.
int tell_problems(const std::vector<std::string>& problems, const Desk& desk);
/// Which cases of the plan --case selects; all without it.
Outcome<std::vector<std::size_t>> selected_cases(const Plan& plan, const Options& options);

extern const char* const tool_version;

}  // namespace halflsb
