#include "runner/run_plan.hpp"

#include <spdlog/spdlog.h>

#include <algorithm>

#include "runner/capture/recorder.hpp"
#include "runner/record/run_folder.hpp"
#include "runner/report/junit_report.hpp"
#include "runner/run_case.hpp"
#include "runner/shell_words.hpp"
#include "runner/wire/wire_cost.hpp"
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
    for (const std::size_t index : request.selected) run.cases_planned.push_back(request.plan.cases[index].name);
    return run;
}

/// Streams, records and judges one case; its files are on the disk when this returns.
Outcome<CaseResult> run_and_record(const RunRequest& request, std::size_t index, std::size_t place, Board& board,
                                   const RunFolder& folder, Files& files, const Clock& clock, RunObserver& observer) {
    const Case& the_case = request.plan.cases[index];
    const std::string file = capture_file_name(index + 1, the_case.name);
    auto recorder = Recorder::open(files, folder.path_of(file), request.plan.signal.output);
    if (!recorder) return recorder.error();
    auto result = run_case({request.plan, the_case, index + 1, place, board.filter_number, *board.wire,
                            board.link->baud(), *recorder, clock, observer});
    if (!result || recorder->samples() == 0) {
        recorder->discard();
    } else {
        if (auto kept = recorder->finish(); !kept) return kept.error();
        result->capture_file = file;
        auto hash = sha256_of_file(folder.path_of(file));
        if (!hash) return hash.error();
        result->capture_sha256 = *hash;
    }
    if (result) result->rerun = rerun_command(request, the_case.name);
    return result;
}

/// Everything between the open folder and the last case; what ended it early.
Outcome<void> run_cases(const RunRequest& request, RunResult& run, RunFolder& folder, Files& files, const Clock& clock,
                        RunObserver& observer) {
    auto board = open_board(request.rig, request.plan.signal, request.image, clock, run.firmware);
    if (!board) return board.error();
    run.board = facts_of(*board, request.rig);
    std::int64_t samples = 0;
    for (const std::size_t index : request.selected) samples += request.plan.cases[index].stimulus->length_samples();
    std::optional<double> wire_s;
    if (const long baud = board->link->baud(); baud > 0) {
        const Signal& signal = request.plan.signal;
        wire_s = wire_seconds(
            wire_cost(samples, run.board.block_samples, signal.input.word_bytes(), signal.output.word_bytes()), baud);
    }
    observer.greeted(run, wire_s);

    bool board_lost = false;
    for (std::size_t place = 1; place <= request.selected.size(); ++place) {
        if (board_lost) {
            if (auto again = greet_again(*board, request.rig, clock); !again) return again;
        }
        auto result =
            run_and_record(request, request.selected[place - 1], place, *board, folder, files, clock, observer);
        if (!result) return result.error();
        board_lost = result->verdict == CaseVerdict::invalid;
        run.cases.push_back(std::move(*result));
        if (auto saved = folder.save(run, false, junit_report(run)); !saved) return saved;
        observer.finished(run);
    }
    return {};
}

}  // namespace

RunResult run_plan(const RunRequest& request, Files& files, const Clock& clock, RunObserver& observer) {
    const Instant started = clock.now();
    RunResult run = facts_of(request, clock);
    auto folder = open_run_folder(files, {run.started_utc, run.plan_file, request.out, request.folder_note});
    if (!folder) {
        run.ended_by = folder.error();
        return run;
    }
    run.folder = folder->path();
    observer.starting(run);
    for (const std::string& warning : run.warnings) observer.warning(warning);
    if (auto saved = folder->save_inputs(run); !saved) run.ended_by = saved.error();
    // From now on a program that dies leaves a record that says so.
    if (auto saved = folder->save(run, false, junit_report(run)); !saved && !run.ended_by) run.ended_by = saved.error();
    if (!run.ended_by) {
        if (auto ran = run_cases(request, run, *folder, files, clock, observer); !ran) run.ended_by = ran.error();
    }
    run.elapsed_s = to_seconds(clock.now() - started);
    if (auto saved = folder->save(run, true, junit_report(run)); !saved) {
        spdlog::error("{}", to_text(saved.error()));
        if (!run.ended_by || run.ended_by->kind != ErrorKind::interrupted) run.ended_by = saved.error();
    }
    return run;
}

}  // namespace halflsb
