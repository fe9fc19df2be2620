#include "tests/diagnostics/workshop.hpp"

#include <cstdio>
#include <cstdlib>
#include <filesystem>
#include <fstream>
#include <sstream>

#include "runner/commands.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/record/run_folder.hpp"
#include "runner/run_plan.hpp"
#include "runner/wire/framed_wire.hpp"
#include "runner/world/sha256.hpp"
#include "tests/runner/cli/fake_terminal.hpp"

namespace halflsb::diagnostics {

namespace {

namespace fs = std::filesystem;

[[noreturn]] void give_up(const std::string& text) {
    std::fprintf(stderr, "%s\n", text.c_str());
    std::exit(70);
}

class NobodyWatches final : public RunObserver {
public:
    void warning(const std::string&) override {}
    void starting(const RunResult&) override {}
    void greeted(const RunResult&, std::optional<double>) override {}
    void progress(std::size_t, std::int64_t, std::int64_t) override {}
    void retrying(const RunResult&, int, const Error&) override {}
    void finished(const RunResult&) override {}
};

}  // namespace

Workshop::Workshop() : before_(fs::current_path().string()) { fs::current_path(folder_.path()); }
Workshop::~Workshop() { fs::current_path(before_); }

void Workshop::write(const std::string& path, const std::string& text) const {
    if (path.find('/') != std::string::npos) fs::create_directories(fs::path(path).parent_path());
    std::ofstream(path, std::ios::binary) << text;
}

std::string Workshop::read(const std::string& path) const {
    std::ostringstream text;
    text << std::ifstream(path, std::ios::binary).rdbuf();
    return text.str();
}

RunResult Workshop::record(const std::string& plan, const std::string& folder,
                           const std::function<void(test::ModelBoard&)>& change) const {
    DiskFiles files;
    auto plan_read = read_plan(plan, files);
    if (auto* wrong = std::get_if<ReadProblems>(&plan_read)) give_up(wrong->texts.front());
    RunRequest request;
    request.plan = std::move(std::get<Plan>(plan_read));
    request.rig.file = "bench.toml";
    request.rig.block_samples = 64;
    request.rig.answer_s = request.rig.greet_s = 1.0;

    test::FakeClock clock;
    test::ModelBoard model;
    model.filters = {{"average", test::ModelBoard::Work::average}};
    model.settings = {{"average-points", 1, 64, 16}};
    if (change) change(model);
    Board board;
    auto link = std::make_unique<test::FakeLink>(clock, model);
    link->set_baud(921600);
    board.link = std::move(link);
    board.wire = make_framed_wire(*board.link, clock, WireLimits{}, 7);
    const auto greeting = board.wire->greet();
    if (!greeting) give_up(to_text(greeting.error()));
    board.greeting = *greeting;

    RunResult run;
    run.tool_version = "0.1.0";
    run.started_utc = clock.utc();
    run.title = request.plan.title;
    run.plan_file = plan;
    run.rig_file = request.rig.file;
    run.plan_text = read(plan);
    run.rig_text = "[board]\n";
    run.plan_sha256 = sha256_of_text(run.plan_text);
    run.rig_sha256 = sha256_of_text(run.rig_text);
    run.signal = request.plan.signal;
    run.plan_parts = request.plan.parts;
    for (std::size_t index = 0; index < request.plan.cases.size(); ++index) {
        request.selected.push_back(index);
        run.cases_planned.push_back(request.plan.cases[index].name);
    }
    auto opened = open_run_folder(files, {run.started_utc, plan, folder});
    if (!opened) give_up(to_text(opened.error()));
    if (auto saved = opened->save_inputs(run); !saved) give_up(to_text(saved.error()));
    NobodyWatches nobody;
    HtmlReport report(run.plan_text);
    if (auto ran = run_cases(request, board, run, *opened, report, files, clock, nobody); !ran)
        run.ended_by = ran.error();
    if (auto saved = opened->save(run, true, ""); !saved) give_up(to_text(saved.error()));
    run.folder = folder;
    return run;
}

std::string Workshop::said_by(const std::vector<std::string>& arguments, bool result) const {
    const auto parsed = parse_command_line(arguments, "0.1.0");
    if (!parsed) give_up(to_text(parsed.error()));
    const Options& options = std::get<Options>(*parsed);
    FakeTerminal terminal;
    terminal.columns = 110;
    DiskFiles files;
    test::FakeClock clock;
    const Desk desk{terminal, files, clock};
    switch (options.command) {
        case Command::judge:
            judge_command(options, desk);
            break;
        case Command::explain:
            explain_command(options, desk);
            break;
        case Command::accept:
            accept_command(options, desk);
            break;
        default:
            options.list ? list_command(options, desk) : check_command(options, desk);
    }
    return terminal.err + (result ? terminal.out : "");
}

}  // namespace halflsb::diagnostics
