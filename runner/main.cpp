// Parse, load, run, exit status.
#include <fcntl.h>

#include <string>
#include <variant>
#include <vector>

#include "runner/cli/diagnostics.hpp"
#include "runner/cli/exit_status.hpp"
#include "runner/commands.hpp"
#include "runner/world/interrupt.hpp"

using namespace halflsb;

int main(int argc, char** argv) {
    // Started without one of the three: the next file opened must not take its place. Not writable, so
    // that a report for nobody is an error and no pass.
    for (int standard = 0; standard <= 2; ++standard) {
        if (fcntl(standard, F_GETFD) < 0) (void)open("/dev/null", O_RDONLY);
    }
    SystemTerminal terminal;
    DiskFiles files;
    const SystemClock clock;
    const Desk desk{terminal, files, clock};

    const auto parsed = parse_command_line(std::vector<std::string>(argv + 1, argv + argc), tool_version);
    if (!parsed) return tell(parsed.error(), {}, desk);
    if (const auto* answer = std::get_if<Answer>(&parsed.value())) {
        const auto written = terminal.write(answer->stream, answer->text);
        return written ? answer->exit_status : tell(written.error(), {}, desk);
    }
    const Options& options = std::get<Options>(parsed.value());
    if (auto watching = watch_for_interrupts(); !watching) return tell(watching.error(), options, desk);
    if (auto harmless = check_log_path(options, files); !harmless) return tell(harmless.error(), options, desk);
    const auto diagnostics = Diagnostics::start(terminal, options.verbose, options.log_file);
    if (!diagnostics) return tell(diagnostics.error(), options, desk);

    switch (options.command) {
        case Command::check:
            return check_command(options, desk);
        case Command::predict:
            return predict_command(options, desk);
        case Command::ports:
            return ports_command(desk);
    }
    return tell({ErrorKind::defect, "", "a command without code", ""}, options, desk);
}
