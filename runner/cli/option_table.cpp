// Every command and option with its words.
#include <algorithm>
#include <charconv>

#include "runner/cli/options.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

std::string quoted(const std::string& argument) { return "'" + printable(argument) + "'"; }

std::string take_path(std::optional<std::string>& path, const std::string& argument) {
    if (argument.empty()) return "the path is empty";
    path = argument;
    return "";
}

std::string take_rig(Options& options, const std::string& argument) {
    if (argument.empty()) return "the path is empty";
    options.rig = argument;
    return "";
}

std::string take_case(Options& options, const std::string& argument) {
    if (argument.empty()) return "the name is empty";
    options.case_patterns.push_back(argument);
    return "";
}

std::string take_seed(Options& options, const std::string& argument) {
    std::uint64_t seed = 0;
    const char* const end = argument.data() + argument.size();
    const auto [stop, error] = std::from_chars(argument.data(), end, seed);
    // A seed may stand in plans and JSON too, whose readers keep whole numbers up to 2^53.
    constexpr std::uint64_t largest_seed = (std::uint64_t{1} << 53) - 1;
    if (error != std::errc() || stop != end || seed > largest_seed) {
        return quoted(argument) + " is not a whole number from 0 to " + std::to_string(largest_seed);
    }
    options.seed = seed;
    return "";
}

std::string take_colour(Options& options, const std::string& argument) {
    if (argument == "auto")
        options.colour = ColourWish::automatic;
    else if (argument == "always")
        options.colour = ColourWish::always;
    else if (argument == "never")
        options.colour = ColourWish::never;
    else
        return quoted(argument) + " is not one of auto, always, never";
    return "";
}

std::string take_image(Options& options, const std::string& argument) { return take_path(options.image, argument); }
std::string take_out(Options& options, const std::string& argument) { return take_path(options.out, argument); }
std::string take_root(Options& options, const std::string& argument) { return take_path(options.root, argument); }
std::string take_log(Options& options, const std::string& argument) { return take_path(options.log_file, argument); }

std::string take_verbose(Options& options, const std::string&) {
    options.verbose = true;
    return "";
}

}  // namespace

const std::vector<CommandSpec>& command_table() {
    static const std::vector<CommandSpec> table = {
        {Command::check, "check", "PLAN",
         "Streams the plan's stimuli to the board, captures what its filter returns and judges it; the main job",
         "halflsb check cw7.toml --rig bench.toml"},
        {Command::predict, "predict", "PLAN",
         "Reads the files and tells on paper what to expect: the filter's response, the time on the wire; needs no "
         "board",
         "halflsb predict cw7.toml --rig bench.toml"},
        {Command::ports, "ports", "", "Lists the serial ports with their stable names", "halflsb ports"},
    };
    return table;
}

const std::vector<OptionSpec>& option_table() {
    constexpr Command check = Command::check, predict = Command::predict, ports = Command::ports;
    static const std::vector<OptionSpec> table = {
        {"--rig",
         "",
         "RIG",
         "",
         "How to reach the board: the lab's rig file",
         {check, predict},
         {check},
         false,
         take_rig},
        {"--case",
         "",
         "NAME",
         "every case",
         "Only this case; the exact name, or a pattern in which * stands for any characters and ? for one; may be "
         "repeated",
         {check, predict},
         {},
         true,
         take_case},
        {"--seed",
         "",
         "N",
         "the plan's",
         "The seed of every random stimulus in place of the plan's",
         {check},
         {},
         false,
         take_seed},
        {"--image",
         "",
         "FILE",
         "firmware not verified",
         "The firmware's ELF file; its build-id must be the board's, and before_run is skipped when it already is",
         {check},
         {},
         false,
         take_image},
        {"--out",
         "",
         "DIR",
         ".halflsb/<UTC time>-<plan>/",
         "Where the run is recorded; a new or an empty folder",
         {check},
         {},
         false,
         take_out},
        {"--root",
         "",
         "DIR",
         "the plan's folder",
         "A plan may name files below this folder and no others",
         {check, predict},
         {},
         false,
         take_root},
        {"--verbose",
         "-v",
         "",
         "",
         "Says on standard error what is being done",
         {check, predict, ports},
         {},
         false,
         take_verbose},
        {"--log",
         "",
         "FILE",
         "none",
         "Keeps all diagnostics in this file, replacing it",
         {check, predict, ports},
         {},
         false,
         take_log},
        {"--color",
         "",
         "WHEN",
         "auto",
         "auto, always or never; auto is colour on a terminal unless NO_COLOR is set or TERM is dumb",
         {check, predict, ports},
         {},
         false,
         take_colour},
    };
    return table;
}

}  // namespace halflsb
