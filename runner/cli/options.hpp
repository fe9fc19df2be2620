// The command line: one table of commands, one of options. The parser, --help, docs/command.md and
// the tests walk them; a word of the command line stands nowhere else.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "runner/cli/terminal.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

enum class Command { check, judge, explain, compare, accept, predict, ports };

struct CommandSpec {
    Command command;
    std::string_view name;
    std::string_view operand;   ///< "PLAN", or "" for none
    std::string_view optional;  ///< a second one that may be left out, or ""
    std::string_view second;    ///< a second one that may not, or ""
    std::string_view help;
    std::string_view example;
};

/// The command line as it was typed, each value checked by itself.
struct Options {
    Command command = Command::check;
    std::string plan;               ///< "" when none was given
    std::string run;                ///< folder of a run, of judge, explain, compare and accept
    std::string run_after;          ///< of compare: the run of the newer firmware
    std::vector<std::string> rigs;  ///< several only for check
    std::vector<std::string> case_patterns;
    std::vector<std::string> labels;
    bool all = false;                    ///< the long cases of the standard set too
    std::optional<double> time_limit_s;  ///< of --for
    std::string time_limit_text;         ///< as typed
    bool list = false;
    bool resolved = false;
    bool json = false;
    std::optional<std::int64_t> kept_samples;  ///< of --samples
    std::optional<std::uint64_t> seed;
    std::optional<std::string> image;
    std::optional<std::string> out;
    std::optional<std::string> html_file;  ///< of judge: where the page goes
    std::optional<std::string> root;       ///< none: the plan's folder
    bool verbose = false;
    std::optional<std::string> log_file;
    ColourWish colour = ColourWish::automatic;
};

struct OptionSpec {
    std::string_view name;           ///< "--rig"
    std::string_view short_name;     ///< "-v", or ""
    std::string_view argument;       ///< "RIG", or "" for a flag
    std::string_view default_text;   ///< what holds without it; "" where that goes without saying
    std::string_view help;           ///< a sentence without its full stop
    std::vector<Command> commands;   ///< those that know it
    std::vector<Command> needed_by;  ///< those that cannot do without, ...
    std::string_view unless;         ///< ... except with this option
    std::vector<Command> repeats;    ///< those to which it may be given more than once
    /// Puts an argument ("" of a flag) into the options; what is wrong with it, or "".
    std::string (*take)(Options& options, const std::string& argument) = nullptr;
};

const std::vector<CommandSpec>& command_table();
/// -h, --help and --version, which end the program at once, are not among them.
const std::vector<OptionSpec>& option_table();

/// Text to print instead of running anything.
struct Answer {
    Stream stream = Stream::out;
    std::string text;
    int exit_status = 0;
};

/// `arguments` without the program's name. An Error is of kind usage; it names the nearest known word
/// for an unknown one. -h or --help anywhere gives the same full text; no argument a short one on
/// standard error with status 64.
Outcome<std::variant<Options, Answer>> parse_command_line(const std::vector<std::string>& arguments,
                                                          std::string_view tool_version);

}  // namespace halflsb
