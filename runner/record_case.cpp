#include "runner/record_case.hpp"

#include <spdlog/spdlog.h>

#include "oracle/judge/deadline_judge.hpp"
#include "runner/base_capture.hpp"
#include "runner/run_case.hpp"
#include "runner/world/sha256.hpp"

namespace halflsb {
namespace {

/// "captures/003-tare-step.npy" as "captures/003-tare-step.attempt-2.npy".
std::string attempt_file_name(const std::string& capture_file, int attempt) {
    const std::size_t dot = capture_file.rfind('.');
    return capture_file.substr(0, dot) + ".attempt-" + std::to_string(attempt) + capture_file.substr(dot);
}

/// "stimuli/003-tare-step.npy" beside "captures/003-tare-step.npy".
std::string stimulus_file_name(const std::string& capture_file) {
    return "stimuli" + capture_file.substr(capture_file.find('/'));
}

Outcome<std::optional<Recorder>> open_sent(const RunDesk& desk, const Case& the_case, const std::string& file) {
    std::optional<Recorder> recorder;
    if (!is_explicit(the_case.shape, the_case.stimulus_values)) return recorder;
    if (auto made = desk.files.make_directories(desk.folder.path_of("stimuli")); !made) return made.error();
    auto opened =
        Recorder::open(desk.files, desk.folder.path_of(file), desk.plan.signal.input, desk.plan.signal.channels);
    if (!opened) return opened.error();
    recorder.emplace(std::move(*opened));
    return recorder;
}

/// "ticks/003-tare-step.npy" beside "captures/003-tare-step.npy".
std::string ticks_file_name(const std::string& capture_file) {
    return "ticks" + capture_file.substr(capture_file.find('/'));
}

Outcome<std::optional<Recorder>> open_ticks(const RunDesk& desk, const Case& the_case, const std::string& file) {
    std::optional<Recorder> recorder;
    if (!wants_ticks(the_case)) return recorder;
    if (auto made = desk.files.make_directories(desk.folder.path_of("ticks")); !made) return made.error();
    auto opened = Recorder::open(desk.files, desk.folder.path_of(file), format_of_ticks(), columns_of_ticks);
    if (!opened) return opened.error();
    recorder.emplace(std::move(*opened));
    return recorder;
}

Outcome<void> keep_ticks(const RunDesk& desk, Recorder& recorder, const std::string& file, CaseResult& result) {
    if (auto kept = recorder.finish(); !kept) return kept;
    auto hash = sha256_of_file(desk.folder.path_of(file));
    if (!hash) return hash.error();
    result.ticks_file = file;
    result.ticks_sha256 = *hash;
    return {};
}

/// Names the capture, or leaves none behind when nothing came.
Outcome<void> keep_capture(const RunDesk& desk, Recorder& recorder, const std::string& file, CaseResult& result) {
    if (recorder.samples() == 0) {
        recorder.discard();
        return {};
    }
    const std::string path = desk.folder.path_of(file);
    recorder.rename(path);
    if (auto kept = recorder.finish(); !kept) return kept;
    auto hash = sha256_of_file(path);
    if (!hash) return hash.error();
    result.capture_file = file;
    result.capture_sha256 = *hash;
    return {};
}

/// What a companion is held against: the capture of a case before it in this run.
Outcome<BaseResponse> base_of(const RunDesk& desk, const Case& the_case) {
    if (!the_case.companion) return BaseResponse{};
    const CaseResult* const base = result_named(desk.run.cases, the_case.companion->base);
    const std::string path = base == nullptr ? "" : desk.folder.path_of(base->capture_file);
    auto response =
        base_response(the_case, base, path, path, desk.plan.signal, desk.run.board.block_samples, desk.files);
    // This run has just written it.
    if (!response) {
        Error error = response.error();
        error.kind = ErrorKind::output;
        return error;
    }
    return response;
}

struct Attempt {
    RecordedCase recorded;
    bool again = false;  ///< the board is ready for another one
};

/// Whether another attempt follows is known before the capture gets its name.
Outcome<void> decide_on_another(const RunDesk& desk, int attempt, Attempt& made) {
    const CaseResult& result = made.recorded.result;
    if (result.verdict != CaseVerdict::invalid || attempt >= desk.rig.attempts) return {};
    if (auto again = greet_again(desk.board, desk.rig, desk.clock); !again) {
        if (again.error().kind != ErrorKind::bench) return again;
        made.recorded.board_gone = again.error();
        return {};
    }
    desk.settings.forget();
    made.again = true;
    return {};
}

Outcome<Attempt> run_attempt(const RunDesk& desk, std::size_t index, std::size_t place, int attempt) {
    const Case& the_case = desk.plan.cases[index];
    const std::string file = capture_file_name(index + 1, the_case.name);
    auto recorder =
        Recorder::open(desk.files, desk.folder.path_of(file), desk.plan.signal.output, desk.plan.signal.channels);
    if (!recorder) return recorder.error();
    auto base = base_of(desk, the_case);
    if (!base) return base.error();
    const std::string stimulus_file = stimulus_file_name(file);
    auto sent = open_sent(desk, the_case, stimulus_file);
    if (!sent) return sent.error();
    const std::string ticks_file = ticks_file_name(file);
    auto ticks = open_ticks(desk, the_case, ticks_file);
    if (!ticks) return ticks.error();
    Recorder* const keeps_ticks = *ticks ? &**ticks : nullptr;
    Recorder* const keeps_sent = *sent ? &**sent : nullptr;

    CasePlots plots;
    // A recorder that is not finished leaves nothing behind.
    const TickCounter counter{desk.board.greeting.tick_hz, desk.board.greeting.tick_bits};
    auto result = run_case({desk.plan, the_case, index + 1, place, desk.board.filter_number, *desk.board.wire,
                            desk.board.link->baud(), desk.settings, *recorder, keeps_sent, desk.clock, desk.observer,
                            std::move(*base), &plots, counter, keeps_ticks});
    if (!result) return result.error();
    Attempt made{{std::move(*result), std::nullopt, std::move(plots)}};
    if (auto decided = decide_on_another(desk, attempt, made); !decided) return decided.error();

    CaseResult& facts = made.recorded.result;
    if (auto kept = keep_capture(desk, *recorder, made.again ? attempt_file_name(file, attempt) : file, facts); !kept)
        return kept.error();
    if (keeps_sent != nullptr && !facts.stimulus.sha256.empty()) {
        if (auto kept = keeps_sent->finish(); !kept) return kept.error();
        facts.stimulus.file = stimulus_file;
    }
    if (keeps_ticks != nullptr && facts.verdict != CaseVerdict::invalid) {
        if (auto kept = keep_ticks(desk, *keeps_ticks, ticks_file, facts); !kept) return kept.error();
    }
    return made;
}

AttemptResult attempt_of(const CaseResult& result) {
    return {*result.invalid,  result.stream,       result.started_utc,
            result.elapsed_s, result.capture_file, result.capture_sha256};
}

}  // namespace

Outcome<RecordedCase> run_and_record(const RunDesk& desk, std::size_t index, std::size_t place) {
    std::vector<AttemptResult> before;
    for (int attempt = 1;; ++attempt) {
        auto made = run_attempt(desk, index, place, attempt);
        if (!made) return made.error();
        CaseResult& result = made->recorded.result;
        if (!made->again) {
            result.attempts = std::move(before);
            return std::move(made->recorded);
        }
        spdlog::info("case {}, attempt {} of {}: {}", index + 1, attempt, desk.rig.attempts, to_text(*result.invalid));
        desk.observer.retrying(desk.run, attempt, *result.invalid);
        before.push_back(attempt_of(result));
    }
}

}  // namespace halflsb
