// Every option with its words.
#include <algorithm>
#include <charconv>

#include "runner/cli/options.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

constexpr std::int64_t fewest_kept_samples = 1;
constexpr std::int64_t most_kept_samples = std::int64_t{1} << 30;
constexpr double longest_time_limit_s = 3.6e6;

std::string quoted(const std::string& argument) { return "'" + printable(argument) + "'"; }

std::string take_path(std::optional<std::string>& path, const std::string& argument) {
    if (argument.empty()) return "the path is empty";
    path = argument;
    return "";
}

std::string take_rig(Options& options, const std::string& argument) {
    if (argument.empty()) return "the path is empty";
    options.rigs.push_back(argument);
    return "";
}

std::string take_label(Options& options, const std::string& argument) {
    if (argument.empty()) return "the label is empty";
    options.labels.push_back(argument);
    return "";
}

std::string take_all(Options& options, const std::string&) {
    options.all = true;
    return "";
}

/// "60s", "5min", "2h"; a plain number are seconds.
std::string take_time_limit(Options& options, const std::string& argument) {
    double amount = 0.0;
    const char* const end = argument.data() + argument.size();
    const auto [stop, error] = std::from_chars(argument.data(), end, amount, std::chars_format::fixed);
    const std::string_view unit(stop, static_cast<std::size_t>(end - stop));
    const double unit_s = unit.empty() || unit == "s" ? 1.0 : unit == "min" ? 60.0 : unit == "h" ? 3600.0 : 0.0;
    if (error != std::errc() || unit_s == 0.0 || !(amount > 0.0) || !(amount * unit_s <= longest_time_limit_s))
        return quoted(argument) + " is no time: write 60s, 5min or 2h, at most 1000h";
    options.time_limit_s = amount * unit_s;
    options.time_limit_text = argument;
    return "";
}

std::string take_samples(Options& options, const std::string& argument) {
    std::int64_t samples = 0;
    const char* const end = argument.data() + argument.size();
    const auto [stop, error] = std::from_chars(argument.data(), end, samples);
    if (error != std::errc() || stop != end || samples < fewest_kept_samples || samples > most_kept_samples) {
        return quoted(argument) + " is not a whole number from " + std::to_string(fewest_kept_samples) + " to " +
               std::to_string(most_kept_samples);
    }
    options.kept_samples = samples;
    return "";
}

std::string take_list(Options& options, const std::string&) {
    options.list = true;
    return "";
}

std::string take_resolved(Options& options, const std::string&) {
    options.resolved = true;
    return "";
}

std::string take_json(Options& options, const std::string&) {
    options.json = true;
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
std::string take_html(Options& options, const std::string& argument) { return take_path(options.html_file, argument); }
std::string take_root(Options& options, const std::string& argument) { return take_path(options.root, argument); }
std::string take_log(Options& options, const std::string& argument) { return take_path(options.log_file, argument); }

std::string take_verbose(Options& options, const std::string&) {
    options.verbose = true;
    return "";
}

}  // namespace

const std::vector<OptionSpec>& option_table() {
    constexpr Command check = Command::check, judge = Command::judge, explain = Command::explain, compare = Command::compare,
                      accept = Command::accept, predict = Command::predict, ports = Command::ports;
    static const std::vector<OptionSpec> table = {
        {"--rig",
         "",
         "RIG",
         "",
         "How to reach the board: the lab's rig file; check takes several, one run after the other; explain asks the "
         "board there what the captures leave open",
         {check, explain, predict},
         {check},
         "--list",
         {check},
         take_rig},
        {"--case",
         "",
         "NAME",
         "every case",
         "Only this case; the exact name, or a pattern in which * stands for any characters and ? for one; may be "
         "repeated",
         {check, judge, explain, compare, predict},
         {},
         "",
         {check, judge, explain, compare, predict},
         take_case},
        {"--label",
         "",
         "NAME",
         "whatever their labels",
         "Only cases with this label; repeated: with any of them; beside --case a case must match both",
         {check, judge, explain, compare, predict},
         {},
         "",
         {check, judge, explain, compare, predict},
         take_label},
        {"--all",
         "",
         "",
         "",
         "Runs the long cases of the standard set too, those of a plan without a [[case]]",
         {check, judge, predict},
         {},
         "",
         {},
         take_all},
        {"--for",
         "",
         "TIME",
         "as long as it takes",
         "Only as many cases, from the first on, as this time on the wire is enough for: 60s, 5min, 2h; says what is "
         "not covered then; explain and compare: end the search after this time with the best so far",
         {check, explain, compare},
         {},
         "",
         {},
         take_time_limit},
        {"--list",
         "",
         "",
         "",
         "Shows the cases that would run, with the time on the wire where a rig is given; no board is touched",
         {check},
         {},
         "",
         {},
         take_list},
        {"--resolved",
         "",
         "",
         "",
         "Prints the plan as it is understood: what it includes joined, every case of [case.each], every default",
         {predict},
         {},
         "",
         {},
         take_resolved},
        {"--seed",
         "",
         "N",
         "the plan's",
         "The seed of every random stimulus in place of the plan's",
         {check, predict},
         {},
         "",
         {},
         take_seed},
        {"--image",
         "",
         "FILE",
         "firmware not verified",
         "The firmware's ELF file; its build-id must be the board's, and before_run is skipped when it already is",
         {check},
         {},
         "",
         {},
         take_image},
        {"--out",
         "",
         "DIR",
         ".halflsb/<UTC time>-<plan>/",
         "Where the run is recorded, a new or an empty folder; with several rigs it gets a folder for each",
         {check},
         {},
         "",
         {},
         take_out},
        {"--html",
         "",
         "FILE",
         "none",
         "Writes report.html anew, of the cases that are judged, replacing the file",
         {judge},
         {},
         "",
         {},
         take_html},
        {"--root",
         "",
         "DIR",
         "the plan's folder",
         "A plan may name files below this folder and no others; accept writes the baseline below it",
         {check, judge, accept, predict},
         {},
         "",
         {},
         take_root},
        {"--samples",
         "",
         "N",
         "65536",
         "How many samples of each case the baseline keeps, from the first on; of the rest hashes of at most 256 "
         "stretches",
         {accept},
         {},
         "",
         {},
         take_samples},
        {"--json",
         "",
         "",
         "",
         "Makes standard output one JSON document and nothing else, also when the command fails",
         {check, judge, explain, compare, accept, predict, ports},
         {},
         "",
         {},
         take_json},
        {"--verbose",
         "-v",
         "",
         "",
         "Says on standard error what is being done",
         {check, judge, explain, compare, accept, predict, ports},
         {},
         "",
         {},
         take_verbose},
        {"--log",
         "",
         "FILE",
         "none",
         "Keeps all diagnostics in this file, replacing it",
         {check, judge, explain, compare, accept, predict, ports},
         {},
         "",
         {},
         take_log},
        {"--color",
         "",
         "WHEN",
         "auto",
         "auto, always or never; auto is colour on a terminal unless NO_COLOR is set or TERM is dumb",
         {check, judge, explain, compare, accept, predict, ports},
         {},
         "",
         {},
         take_colour},
    };
    return table;
}

}  // namespace halflsb
