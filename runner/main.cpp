// Parse, load, run, exit status.
#include <string>
#include <variant>
#include <vector>

#include "runner/cli/diagnostics.hpp"
#include "runner/cli/exit_status.hpp"
#include "runner/commands.hpp"

using namespace halflsb;

int main(int argc, char** argv) {
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
