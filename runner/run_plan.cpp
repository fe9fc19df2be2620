#include "runner/run_plan.hpp"

#include <spdlog/spdlog.h>

#include <algorithm>

#include "oracle/judge/rule_kinds.hpp"
#include "runner/case_cost.hpp"
#include "runner/record_case.hpp"
#include "runner/report/html_report.hpp"
#include "runner/report/junit_report.hpp"
#include "runner/run_case.hpp"
#include "runner/shell_words.hpp"
#include "runner/standard_facts.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/sha256.hpp"

namespace halflsb {
namespace {

std::string rerun_command(const RunRequest& request, const std::string& case_name) {
    // A path that begins with "-" would be taken for an option.
    const std::string plan = (request.plan.file.starts_with('-') ? "./" : "") + request.plan.file;
    std::string command = "halflsb check " + shell_quoted(plan) + " --rig " + shell_quoted(request.rig.file) + " " +
                          case_option(case_name);
    if (request.seed) command += " --seed " + std::to_string(*request.seed);
    if (request.root) command += " --root " + shell_quoted(*request.root);
    if (request.image) command += " --image " + shell_quoted(request.image->file);
    return command;
}

RunResult facts_of(const RunRequest& request, const Clock& clock) {
    RunResult run;
    run.tool_version = request.tool_version;
    run.started_utc = clock.utc();
    run.title = request.plan.title;
    run.plan_file = request.plan.file;
    run.rig_file = request.rig.file;
    run.plan_text = request.plan_text;
    run.rig_text = request.rig_text;
    run.plan_sha256 = sha256_of_text(request.plan_text);
    run.rig_sha256 = sha256_of_text(request.rig_text);
    run.seed = request.seed;
    run.signal = request.plan.signal;
    run.board.rig_name = request.rig.name;
    run.board.link = request.rig.port + " at " + std::to_string(request.rig.baud) + " baud";
    run.warnings = request.warnings;
    run.plan_parts = request.plan.parts;
    run.root = request.root.value_or("");
    run.attempts_allowed = request.rig.attempts;
    for (const std::size_t index : request.selected) run.cases_planned.push_back(request.plan.cases[index].name);
    run.may_end_early = std::any_of(request.selected.begin(), request.selected.end(), [&](std::size_t index) {
        return may_end_early(request.plan, request.plan.cases[index]);
    });
    run.taken = taken_by_itself(request.plan, request.selected, request.left_out, request.why_left_out);
    return run;
}

/// What all cases will take on the line, with the zeros that flush; none where baud has no meaning.
std::optional<double> wire_seconds_of(const RunRequest& request, const Board& board, int block_samples) {
    const long baud = board.link->baud();
    if (baud <= 0) return std::nullopt;
    const WireInstant instant = instant_of(board.greeting.filters[board.filter_number]);
    double total_s = 0.0;
    for (const std::size_t index : request.selected) {
        total_s += wire_seconds(case_cost(request.plan.cases[index], block_samples, instant), baud);
    }
    return total_s;
}

void say_start_states(const RunRequest& request) {
    for (const std::size_t index : request.selected) {
        const Case& the_case = request.plan.cases[index];
        if (the_case.start == Start::flush)
            spdlog::info("case {}: {} zeros flush the filter first", index + 1, the_case.start_samples);
        if (the_case.start == Start::running)
            spdlog::info("case {}: goes on running, no rule looks at its first {} samples", index + 1,
                         the_case.start_samples);
    }
}

/// The loop over the cases; what ended it early.
Outcome<void> stream_cases(const RunRequest& request, const RunDesk& desk, RunResult& run, RunFolder& folder,
                           HtmlReport& page) {
    bool board_lost = false;
    for (std::size_t place = 1; place <= request.selected.size(); ++place) {
        if (board_lost) {
            if (auto again = greet_again(desk.board, desk.rig, desk.clock); !again) return again;
            desk.settings.forget();
        }
        auto recorded = run_and_record(desk, request.selected[place - 1], place);
        if (!recorded) return recorded.error();
        CaseResult& result = recorded->result;
        result.rerun = rerun_command(request, result.name);
        board_lost = !desk.board.wire->is_streaming(desk.board.filter_number);
        run.cases.push_back(std::move(result));
        page.add_case(run, recorded->plots);
        if (auto saved = folder.save(run, false, junit_report(run)); !saved) return saved;
        desk.observer.finished(run);
        if (recorded->board_gone && place < request.selected.size()) return *recorded->board_gone;
    }
    return {};
}

/// The board must not keep what a case changed. After an interruption too, as far as a second goes.
void put_settings_back(const RunDesk& desk, bool ended_early, RunResult& run) {
    const auto changes = desk.settings.changes_back();
    if (changes.empty()) return;
    const InterruptLull lull;
    const auto put_back = [&]() -> Outcome<void> {
        if (ended_early || !desk.board.wire->is_streaming(desk.board.filter_number)) {
            if (auto again = greet_briefly(desk.board, desk.rig, desk.clock); !again) return again;
            if (auto started = desk.board.wire->start(desk.board.filter_number); !started) return started;
        }
        return desk.settings.make(changes, *desk.board.wire, desk.clock);
    };
    if (auto done = put_back(); !done) {
        run.warnings.push_back("the board keeps settings that this run changed: " + desk.settings.text_of_changed() +
                               "; " + done.error().problem + "; power-cycle the board before it is used");
        desk.observer.warning(run.warnings.back());
    }
}

/// Everything between the open folder and the last case; what ended it early.
Outcome<void> run_on_rig(const RunRequest& request, RunResult& run, RunFolder& folder, HtmlReport& page, Files& files,
                         const Clock& clock, RunObserver& observer) {
    auto board = open_board(request.rig, request.plan, request.image, clock, run.firmware);
    if (!board) return board.error();
    return run_cases(request, *board, run, folder, page, files, clock, observer);
}

}  // namespace

Outcome<void> run_cases(const RunRequest& request, Board& board, RunResult& run, RunFolder& folder, HtmlReport& page,
                        Files& files, const Clock& clock, RunObserver& observer) {
    run.board = facts_of(board, request.rig);
    auto settings = BoardSettings::agreed(board.greeting, request.plan, request.selected, board.link->name());
    if (!settings) return settings.error();
    say_start_states(request);
    observer.greeted(run, wire_seconds_of(request, board, run.board.block_samples));
    const RunDesk desk{request.plan, request.rig, run, folder, board, *settings, files, clock, observer};
    const Outcome<void> ran = stream_cases(request, desk, run, folder, page);
    put_settings_back(desk, !ran, run);
    return ran;
}

RunResult run_plan(const RunRequest& request, Files& files, const Clock& clock, RunObserver& observer) {
    const Instant started = clock.now();
    RunResult run = facts_of(request, clock);
    auto folder = open_run_folder(files, {run.started_utc, run.plan_file, request.out, request.folder_note});
    if (!folder) {
        run.ended_by = folder.error();
        return run;
    }
    run.folder = folder->path();
    HtmlReport page(request.plan_text);
    observer.starting(run);
    for (const std::string& warning : run.warnings) observer.warning(warning);
    if (auto saved = folder->save_inputs(run); !saved) run.ended_by = saved.error();
    // From now on a program that dies leaves a record that says so.
    if (auto saved = folder->save(run, false, junit_report(run)); !saved && !run.ended_by) run.ended_by = saved.error();
    if (!run.ended_by) {
        if (auto ran = run_on_rig(request, run, *folder, page, files, clock, observer); !ran)
            run.ended_by = ran.error();
    }
    run.elapsed_s = to_seconds(clock.now() - started);
    if (auto saved = folder->save_page(page.document(run)); !saved && !run.ended_by) run.ended_by = saved.error();
    if (auto saved = folder->save(run, true, junit_report(run)); !saved) {
        spdlog::error("{}", to_text(saved.error()));
        if (!run.ended_by || run.ended_by->kind != ErrorKind::interrupted) run.ended_by = saved.error();
    }
    return run;
}

}  // namespace halflsb
