#include "runner/run_case.hpp"

#include <spdlog/spdlog.h>

#include <algorithm>
#include <functional>

#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/judge/companion_case.hpp"
#include "oracle/measure/log_histogram.hpp"
#include "runner/case_cost.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/sha256.hpp"

namespace halflsb {
namespace {

/// How long one step of the stream may wait before progress is shown again.
constexpr double step_s = 0.1;

/// What travels in one go, and what becomes of the answer. Codes of all channels are adjacent.
struct Passage {
    std::int64_t samples = 0;
    std::function<Outcome<void>(std::int64_t first_index, std::span<Code>)> fill;
    std::function<Outcome<void>(const Received&)> keep;            ///< before anything else waits
    std::function<void(std::span<const Code>)> look;               ///< once the line has work again
    std::function<bool()> is_enough;                               ///< nothing more need be sent
    std::function<std::int64_t(std::int64_t room)> most_together;  ///< of the samples that could be sent now
};

/// A case on its way: the facts grow with every step.
class Streaming {
public:
    Streaming(const CaseStage& stage, StreamFacts& facts)
        : stage_(stage), facts_(facts), channels_(static_cast<std::size_t>(stage.plan.signal.channels)) {}

    /// Opens a stream or goes on in the open one, with the settings of the case.
    Outcome<void> begin() {
        Wire& wire = stage_.wire;
        const bool goes_on = stage_.the_case.start != Start::reset && wire.is_streaming(stage_.filter_number);
        if (!goes_on) {
            const auto returned = [rates = CaseRates(stage_.plan, stage_.the_case)](std::int64_t sent) {
                return rates.returned(sent);
            };
            if (auto started = wire.start(stage_.filter_number, returned); !started) return started;
        }
        const auto changes = stage_.settings.changes_for(stage_.the_case);
        if (!changes.empty()) return stage_.settings.make(changes, wire, stage_.clock);
        return goes_on ? wire.settle() : Outcome<void>();
    }

    /// Until the answer to the last sample is there. Tells how many were sent.
    Outcome<std::int64_t> pass(Passage passage) {
        std::int64_t sent = 0, answered = 0;
        const std::int64_t sent_before = facts_.samples_sent;
        while (answered < passage.samples) {
            if (auto queued = send_ahead(passage, sent); !queued) return queued.error();
            auto step = stage_.wire.advance(stage_.clock.now() + seconds(step_s));
            if (!step) return step.error();
            if (step->answered > 0) {
                if (auto kept = passage.keep(*step); !kept) return kept.error();
                answered += step->answered;
                facts_.samples_received += static_cast<std::int64_t>(step->samples.size() / channels_);
                if (auto queued = send_ahead(passage, sent); !queued) return queued.error();
                passage.look(step->samples);
                // What is on its way comes back all the same.
                if (passage.is_enough()) passage.samples = sent;
            }
            stage_.observer.progress(stage_.place, sent_before + answered, sent_samples(stage_.the_case));
        }
        return passage.samples;
    }

private:
    /// Queues blocks as far as credit reaches, so that the line has work while we judge.
    Outcome<void> send_ahead(const Passage& passage, std::int64_t& sent) {
        while (sent < passage.samples) {
            const auto room = static_cast<std::int64_t>(stage_.wire.room_samples());
            if (room == 0) break;
            const std::int64_t count = std::min(passage.most_together(room), passage.samples - sent);
            codes_.resize(static_cast<std::size_t>(count) * channels_);
            if (auto filled = passage.fill(sent, codes_); !filled) return filled;
            stage_.wire.send(codes_);
            sent += count;
            facts_.samples_sent += count;
        }
        return {};
    }

    const CaseStage& stage_;
    StreamFacts& facts_;
    std::size_t channels_;
    std::vector<Code> codes_;
};

/// Its answers are awaited before the stimulus begins, so that no tick of theirs counts for it.
Passage flush_of(const CaseStage& stage) {
    const Code silence = zero_code(stage.plan.signal.input);
    return {stage.the_case.start == Start::flush ? stage.the_case.start_samples : 0,
            [silence](std::int64_t, std::span<Code> codes) -> Outcome<void> {
                std::fill(codes.begin(), codes.end(), silence);
                return {};
            },
            [](const Received&) { return Outcome<void>(); },
            [](std::span<const Code>) {},
            [] { return false; },
            [](std::int64_t room) { return room; }};
}

std::vector<BlockTicks> ticks_of(const std::vector<AnsweredBlock>& blocks) {
    std::vector<BlockTicks> ticks;
    for (const AnsweredBlock& block : blocks) ticks.push_back({block.samples, block.ticks_total, block.ticks_largest});
    return ticks;
}

/// How long blocks took, on the board and there and back.
class BlockTimes {
public:
    void add(const std::vector<AnsweredBlock>& blocks) {
        for (const AnsweredBlock& block : blocks) {
            if (block.samples <= 0) continue;
            ticks_.add(static_cast<double>(block.ticks_total) / static_cast<double>(block.samples));
            round_trip_s_.add(std::max(to_seconds(block.round_trip), 0.0));
        }
    }
    void tell(StreamFacts& facts) const {
        facts.round_trip_s = told(round_trip_s_);
        if (ticks_.count() > 0 && ticks_.largest() > 0.0) facts.ticks_per_sample = told(ticks_);
    }

private:
    static std::optional<Spread> told(const LogHistogram& of) {
        if (of.count() == 0) return std::nullopt;
        return Spread{judged(of.quantile(0.5)), judged(of.quantile(0.99)), judged(of.largest())};
    }

    LogHistogram ticks_, round_trip_s_;
};

/// Streams the whole case. An Error of kind bench leaves what came until then recorded and judged by
/// nobody.
Outcome<void> stream(const CaseStage& stage, CaseJudge& judge, CaseResult& result) {
    Streaming streaming(stage, result.stream);
    if (auto begun = streaming.begin(); !begun) return begun;
    if (auto flushed = streaming.pass(flush_of(stage)); !flushed) return flushed.error();

    const auto digest = make_code_digest();
    BlockTimes times;
    const Passage stimulus{
        stage.the_case.stimulus->length_samples(),
        [&](std::int64_t first_index, std::span<Code> codes) -> Outcome<void> {
            fill_case_codes(stage.plan, stage.the_case, first_index, codes);
            digest->add(stage.plan.signal.input, codes);
            return stage.sent != nullptr ? stage.sent->append(codes) : Outcome<void>();
        },
        [&](const Received& received) -> Outcome<void> {
            result.stream.ticks_total += received.ticks_total;
            result.stream.ticks_largest = std::max(result.stream.ticks_largest, received.ticks_largest);
            times.add(received.blocks);
            if (stage.ticks != nullptr) {
                const std::vector<BlockTicks> ticks = ticks_of(received.blocks);
                if (auto kept = stage.ticks->append(codes_of_ticks(ticks)); !kept) return kept;
                judge.add_ticks(stage.tick_counter, ticks);
            }
            return stage.recorder.append(received.samples);
        },
        [&](std::span<const Code> response) { judge.add(response); }, [&] { return judge.is_decided(); },
        [&](std::int64_t room) { return sent_block_samples(stage.the_case, room); }};
    const auto passed = streaming.pass(stimulus);
    times.tell(result.stream);
    if (!passed) return passed.error();
    result.stimulus.samples = *passed;
    result.stimulus.sha256 = digest->value();
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

/// What the case is, before anything of it happened.
CaseResult facts_of(const CaseStage& stage) {
    CaseResult result;
    result.number = stage.number;
    result.name = stage.the_case.name;
    result.started_utc = stage.clock.utc();
    result.stimulus.shape = stage.the_case.shape;
    result.stimulus.values = stage.the_case.stimulus_values;
    result.stimulus.samples = stage.the_case.stimulus->length_samples();
    result.start = stage.the_case.start;
    result.start_samples = stage.the_case.start_samples;
    result.settings = stage.the_case.settings;
    result.rate_hz = stage.the_case.rate_hz;
    result.returned_per_sent = returned_per_sent(stage.plan, stage.the_case);
    result.companion = stage.the_case.companion;
    return result;
}

}  // namespace

Outcome<CaseResult> run_case(const CaseStage& stage) {
    const Instant started = stage.clock.now();
    CaseResult result = facts_of(stage);
    CaseJudge judge(stage.plan, stage.the_case, stage.plots != nullptr, stage.base);

    const Outcome<void> streamed = stream(stage, judge, result);
    if (result.stream.samples_sent > 0) take_figures(stage, result.stream);
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
        if (stage.plots != nullptr) *stage.plots = std::move(judgement->plots);
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
