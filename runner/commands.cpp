#include "runner/commands.hpp"

#include "runner/cli/exit_status.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/config/rig_file.hpp"
#include "runner/link/ports.hpp"
#include "runner/report/terminal_report.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

const char* const tool_version = HALFLSB_VERSION;

TextStyle style_of(const Terminal& terminal, Stream stream, ColourWish wish) {
    return {wants_colour(terminal, stream, wish), columns_for(terminal, stream), shows_unicode(terminal)};
}

Outcome<void> say(const Desk& desk, std::string_view text) {
    return desk.answer != nullptr ? Outcome<void>() : desk.terminal.write(Stream::out, text);
}

int tell(const Error& error, const Options& options, const Desk& desk) {
    if (desk.answer != nullptr) {
        desk.answer->set_error(error);
    } else {
        (void)desk.terminal.write(Stream::err, error_text(error, style_of(desk.terminal, Stream::err, options.colour)));
    }
    return exit_status_of(error);
}

int tell_problems(const std::vector<std::string>& problems, const Desk& desk) {
    if (desk.answer != nullptr) {
        desk.answer->set_problems(problems);
    } else {
        for (const std::string& problem : problems)
            (void)desk.terminal.write(Stream::err, problem + (problem.ends_with('\n') ? "" : "\n"));
    }
    return exit_status_of(Error{ErrorKind::input, "", "", ""});
}

std::variant<PlanAndRigs, ReadProblems> read_plan_and_rigs(const Options& options, const Desk& desk) {
    PlanAndRigs made;
    ReadProblems problems;
    auto plan = read_plan(options.plan, desk.files, {options.root.value_or(""), options.seed});
    if (auto* wrong = std::get_if<ReadProblems>(&plan)) {
        problems = std::move(*wrong);
    } else {
        made.plan = std::move(std::get<Plan>(plan));
    }
    for (const std::string& path : options.rigs) {
        auto rig = read_rig(path, desk.files);
        if (auto* wrong = std::get_if<ReadProblems>(&rig)) {
            problems.texts.insert(problems.texts.end(), wrong->texts.begin(), wrong->texts.end());
        } else {
            made.rigs.push_back(std::move(std::get<Rig>(rig)));
        }
    }
    if (!problems.texts.empty()) return problems;
    return made;
}

namespace {

/// Refuses to replace what the command reads by what it writes.
Outcome<void> check_replaced(const char* option, const std::string& what, const std::string& file,
                             const Options& options, const Files& files) {
    const std::string written = files.resolved(file);
    std::vector<std::string> inputs = options.rigs;
    inputs.insert(inputs.end(), {options.plan, options.image.value_or("")});
    for (const std::string& input : inputs) {
        if (written.empty() || input.empty() || files.resolved(input) != written) continue;
        return Error{ErrorKind::usage, option, "it would replace " + printable(input),
                     "give " + what + " a name of its own"};
    }
    const std::string run = options.run.empty() ? "" : files.resolved(options.run);
    if (!written.empty() && !run.empty() && written.compare(0, run.size() + 1, run + "/") == 0) {
        return Error{ErrorKind::usage, option, "it would replace a file of the run " + printable(options.run),
                     "give " + what + " a name outside of that folder"};
    }
    return {};
}

}  // namespace

Outcome<void> check_written_paths(const Options& options, const Files& files) {
    if (options.log_file) {
        if (auto harmless = check_replaced("--log", "the log", *options.log_file, options, files); !harmless)
            return harmless;
    }
    if (!options.html_file) return {};
    const std::string page = files.resolved(*options.html_file);
    if (!page.empty() && page == files.resolved(options.run + "/report.html")) return {};
    if (!page.empty() && options.log_file && page == files.resolved(*options.log_file))
        return Error{ErrorKind::usage, "--html", "it would replace the log", "give the page a name of its own"};
    return check_replaced("--html", "the page", *options.html_file, options, files);
}

int ports_command(const Options& options, const Desk& desk) {
    const auto ports = list_ports();
    if (!ports) return tell(ports.error(), options, desk);
    if (desk.answer != nullptr) {
        std::vector<ListedPort> listed;
        for (const PortInfo& port : *ports) listed.push_back({port.device, port.stable_name, port.description});
        desk.answer->set_ports(listed);
        return 0;
    }
    if (ports->empty()) {
        (void)desk.terminal.write(Stream::err, "no serial port is plugged in\n");
        return 0;
    }
    const TextStyle style = style_of(desk.terminal, Stream::out, options.colour);
    Table table{{{"device", false, 0}, {"stable name", false, 0}, {"description", false, 1}}, {}, 0};
    for (const PortInfo& port : *ports) {
        table.rows.push_back({printable(port.device), port.stable_name.empty() ? "-" : printable(port.stable_name),
                              printable(port.description)});
    }
    const auto written = say(desk, laid_out(style, table));
    return written ? 0 : tell(written.error(), options, desk);
}

}  // namespace halflsb
