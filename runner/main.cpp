// Parse, load, run, exit status.
#include <fcntl.h>

#include <algorithm>
#include <string>
#include <variant>
#include <vector>

#include "runner/cli/diagnostics.hpp"
#include "runner/cli/exit_status.hpp"
#include "runner/commands.hpp"
#include "runner/world/interrupt.hpp"

using namespace halflsb;

namespace {

int run(const Options& options, const Desk& desk) {
    if (auto watching = watch_for_interrupts(); !watching) return tell(watching.error(), options, desk);
    if (auto harmless = check_written_paths(options, desk.files); !harmless)
        return tell(harmless.error(), options, desk);
    const auto diagnostics = Diagnostics::start(desk.terminal, options.verbose, options.log_file);
    if (!diagnostics) return tell(diagnostics.error(), options, desk);
    switch (options.command) {
        case Command::check:
            return options.list ? list_command(options, desk) : check_command(options, desk);
        case Command::judge:
            return judge_command(options, desk);
        case Command::explain:
            return explain_command(options, desk);
        case Command::compare:
            return compare_command(options, desk);
        case Command::accept:
            return accept_command(options, desk);
        case Command::predict:
            return predict_command(options, desk);
        case Command::ports:
            return ports_command(options, desk);
    }
    return tell({ErrorKind::defect, "", "a command without code", ""}, options, desk);
}

/// A command line that is wrong has no options yet, and its error must reach who asked for a document.
bool asks_for_json(const std::vector<std::string>& arguments) {
    const auto end = std::find(arguments.begin(), arguments.end(), "--");
    return std::find(arguments.begin(), end, "--json") != end;
}

std::string_view command_of(const std::vector<std::string>& arguments) {
    for (const CommandSpec& command : command_table()) {
        if (!arguments.empty() && arguments.front() == command.name) return command.name;
    }
    return "";
}

}  // namespace

int main(int argc, char** argv) {
    // Started without one of the three: the next file opened must not take its place. Not writable, so
    // that a report for nobody is an error and no pass.
    for (int standard = 0; standard <= 2; ++standard) {
        if (fcntl(standard, F_GETFD) < 0) (void)open("/dev/null", O_RDONLY);
    }
    SystemTerminal terminal;
    DiskFiles files;
    const SystemClock clock;
    const std::vector<std::string> arguments(argv + 1, argv + argc);
    JsonAnswer answer(command_of(arguments), tool_version);
    const Desk desk{terminal, files, clock, asks_for_json(arguments) ? &answer : nullptr};

    const auto parsed = parse_command_line(arguments, tool_version);
    int status = 0;
    if (!parsed) {
        status = tell(parsed.error(), {}, desk);
    } else if (const auto* words = std::get_if<Answer>(&parsed.value())) {
        const auto written = terminal.write(words->stream, words->text);
        return written ? words->exit_status : tell(written.error(), {}, {terminal, files, clock});
    } else {
        status = run(std::get<Options>(parsed.value()), desk);
    }
    if (desk.answer == nullptr) return status;
    const auto written = terminal.write(Stream::out, answer.text(status));
    return written ? status : tell(written.error(), {}, {terminal, files, clock});
}
