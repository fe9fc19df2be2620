// What a command line can be refused for.
#include <fcntl.h>
#include <spdlog/spdlog.h>
#include <unistd.h>

#include "runner/cli/case_selection.hpp"
#include "runner/cli/diagnostics.hpp"
#include "runner/cli/options.hpp"
#include "runner/commands.hpp"
#include "tests/diagnostics/page.hpp"
#include "tests/runner/cli/fake_terminal.hpp"

namespace halflsb::diagnostics {

namespace {

/// Logs and terminals that take nothing.
void show_streams(Page& page) {
    Options options;
    options.plan = "/etc/hostname";
    options.log_file = "/etc/hostname";
    page.show("a log over the plan", check_written_paths(options, DiskFiles()));
    options = {};
    options.run = "/etc";
    options.log_file = "/etc/hostname";
    page.show("a log over a file of the run", check_written_paths(options, DiskFiles()));
    options.log_file.reset();
    options.html_file = "/etc/hostname";
    page.show("a page over a file of the run", check_written_paths(options, DiskFiles()));
    options.run = "/nowhere";
    options.log_file = "/etc/hostname";
    page.show("a page over the log", check_written_paths(options, DiskFiles()));
    FakeTerminal terminal;
    page.show("a log in a folder that is not there", Diagnostics::start(terminal, false, "/nowhere/cw7.log"));
    if (const auto started = Diagnostics::start(terminal, false, "/dev/full")) spdlog::info("one line");
    page.show("a log on a full disk", terminal.err);
    SystemTerminal system;
    const int kept = dup(STDERR_FILENO), full = open("/dev/full", O_WRONLY);
    dup2(full, STDERR_FILENO);
    const auto written = system.write(Stream::err, "one line\n");
    dup2(kept, STDERR_FILENO);
    close(kept);
    close(full);
    page.show("standard error on a full disk", written);
}

}  // namespace

void command_line_chapter(Page& page) {
    page.chapter("The command line");
    const auto refused = [&](const std::vector<std::string>& arguments) {
        std::string line = "halflsb";
        for (const std::string& argument : arguments) line += " " + (argument.empty() ? "''" : argument);
        page.show(line, parse_command_line(arguments, "0"));
    };
    refused({"chekc"});
    refused({"sing"});
    refused({"check"});
    refused({"check", "cw7.toml"});
    refused({"check", "cw7.toml", "--rgi", "bench.toml"});
    refused({"check", "cw7.toml", "--colour-of-the-sky"});
    refused({"check", "cw7.toml", "--rig", "bench.toml", "--for", "soon"});
    refused({"--rig", "bench.toml", "check", "cw7.toml"});
    refused({"predict", "cw7.toml", "--image", "cw7.elf"});
    refused({"check", "cw7.toml", "other.toml", "--rig", "bench.toml"});
    refused({"judge", "run", "cw7.toml", "other.toml"});
    refused({"judge", "run", ""});
    refused({"ports", "all"});
    refused({"check", "cw7.toml", "--rig"});
    refused({"check", "cw7.toml", "--rig", ""});
    refused({"check", "cw7.toml", "--rig="});
    refused({"check", "cw7.toml", "--rig", "bench.toml", "--case", ""});
    refused({"check", "cw7.toml", "--rig", "bench.toml", "--verbose=yes"});
    refused({"check", "cw7.toml", "--rig", "bench.toml", "--seed", "-1"});
    refused({"check", "cw7.toml", "--rig", "bench.toml", "--seed", "1", "--seed", "2"});
    refused({"check", "cw7.toml", "--rig", "bench.toml", "--color", "red"});
    page.show("--case 'mians hum'", select_cases({"mains hum", "tare step"}, {"mians hum"}));
    std::vector<std::string> many;
    for (int i = 1; i <= 60; ++i) many.push_back("case " + std::to_string(i));
    page.show("--case of a plan with many cases", select_cases(many, {"noise"}));
    page.show("--label of a plan without labels", select_labelled({0}, {{}}, {"quick"}));
    show_streams(page);
}

}  // namespace halflsb::diagnostics
