#include "runner/run_case.hpp"

#include <spdlog/spdlog.h>

#include <algorithm>

#include "oracle/judge/case_judge.hpp"
#include "runner/world/interrupt.hpp"

namespace halflsb {
namespace {

/// How long one step of the stream may wait before progress is shown again.
constexpr double step_s = 0.1;

/// Queues blocks as far as credit reaches, so that the line has work while we judge.
void send_ahead(const CaseStage& stage, std::int64_t& sent, std::vector<Code>& codes) {
    const std::int64_t total = stage.the_case.stimulus->length_samples();
    while (sent < total) {
        const auto room = static_cast<std::int64_t>(stage.wire.room_samples());
        if (room == 0) return;
        codes.resize(static_cast<std::size_t>(std::min(room, total - sent)));
        fill_codes(*stage.the_case.stimulus, stage.plan.signal.input, stage.plan.signal.quantise, sent, codes);
        stage.wire.send(codes);
        sent += static_cast<std::int64_t>(codes.size());
    }
}

/// Streams the whole case. An Error of kind bench leaves what came until then recorded and judged by
/// nobody.
Outcome<void> stream(const CaseStage& stage, CaseJudge& judge, StreamFacts& facts) {
    const std::int64_t total = stage.the_case.stimulus->length_samples();
    std::vector<Code> codes;
    if (auto started = stage.wire.start(stage.filter_number); !started) return started;
    while (facts.samples_received < total) {
        send_ahead(stage, facts.samples_sent, codes);
        auto received = stage.wire.advance(stage.clock.now() + seconds(step_s));
        if (!received) return received.error();
        if (!received->samples.empty()) {
            if (auto kept = stage.recorder.append(received->samples); !kept) return kept;
            facts.samples_received += static_cast<std::int64_t>(received->samples.size());
            facts.ticks_total += received->ticks_total;
            facts.ticks_largest = std::max(facts.ticks_largest, received->ticks_largest);
            send_ahead(stage, facts.samples_sent, codes);
            judge.add(received->samples);
        }
        stage.observer.progress(stage.place, facts.samples_received, total);
    }
    return {};
}

void take_figures(const CaseStage& stage, StreamFacts& facts) {
    const WireFigures figures = stage.wire.figures();
    facts.bytes_to_board = figures.bytes_sent;
    facts.bytes_to_host = figures.bytes_received;
    facts.frames_bad_at_host = figures.frames_bad;
    facts.resends = figures.resends;
    facts.streaming_s = to_seconds(figures.streaming);
    if (stage.baud > 0 && facts.streaming_s > 0.0) {
        constexpr double bits_per_byte = 10.0;  // start, 8 data, stop
        const double busier = static_cast<double>(std::max(figures.bytes_sent, figures.bytes_received));
        const double ratio = busier * bits_per_byte / static_cast<double>(stage.baud) / facts.streaming_s;
        // Faster than the line rate: an emulator or a USB port that ignores it.
        if (ratio <= 1.02) facts.line_use_ratio = ratio;
    }
}

}  // namespace

Outcome<CaseResult> run_case(const CaseStage& stage) {
    const Instant started = stage.clock.now();
    CaseResult result;
    result.number = stage.number;
    result.name = stage.the_case.name;
    result.started_utc = stage.clock.utc();
    CaseJudge judge(stage.plan, stage.the_case);

    const Outcome<void> streamed = stream(stage, judge, result.stream);
    take_figures(stage, result.stream);
    if (!streamed && streamed.error().kind != ErrorKind::bench) return streamed.error();
    if (streamed) {
        result.grade = Grade::proven;  // the framed wire accounts for every sample
        auto judgement = judge.finish([&](std::int64_t first, std::span<Code> codes) -> Outcome<void> {
            if (interrupted()) return interrupted_error("case \"" + result.name + "\"");
            return stage.recorder.read(first, codes);
        });
        if (!judgement) return judgement.error();
        result.rules = std::move(judgement->rules);
        result.latency_told = judgement->latency_told;
        result.verdict = verdict_of(result.rules);
        // The board's own counters are news, not evidence: a board that cannot tell them is not blamed.
        if (auto counters = stage.wire.counters()) {
            result.stream.frames_bad_at_board = counters->frames_bad;
            result.stream.bytes_lost_at_board = counters->bytes_lost;
            result.stream.gaps_at_board = counters->gaps;
        } else if (counters.error().kind == ErrorKind::interrupted) {
            spdlog::debug("interrupted after the last sample of case {}", stage.number);
        }
    } else {
        result.grade = Grade::broken;
        result.verdict = CaseVerdict::invalid;
        result.invalid = streamed.error();
    }
    result.elapsed_s = to_seconds(stage.clock.now() - started);
    return result;
}

}  // namespace halflsb
