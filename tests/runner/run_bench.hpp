// A run on the model board over a fake line: plan and rig in memory, the run's folder on the disk.
#pragma once

#include <catch2/catch.hpp>
#include <memory>
#include <string>
#include <utility>
#include <vector>

#include "runner/run_plan.hpp"
#include "runner/wire/framed_wire.hpp"
#include "runner/world/interrupt.hpp"
#include "stimuli/npy.hpp"
#include "tests/support/model_board.hpp"
#include "tests/support/plans.hpp"
#include "tests/support/temporary_folder.hpp"

namespace halflsb::test {

class RememberingObserver final : public RunObserver {
public:
    std::vector<std::string> warnings, retries, finished_cases;
    std::optional<double> wire_s;
    std::vector<std::pair<std::int64_t, std::int64_t>> steps;  ///< of progress: done, total
    int greetings = 0;

    void warning(const std::string& text) override { warnings.push_back(text); }
    void starting(const RunResult&) override {}
    void greeted(const RunResult&, std::optional<double> seconds) override {
        ++greetings;
        wire_s = seconds;
    }
    void progress(std::size_t, std::int64_t done, std::int64_t total) override { steps.emplace_back(done, total); }
    void retrying(const RunResult& run, int attempt, const Error& reason) override {
        retries.push_back(run.cases_planned[run.cases.size()] + ", " + std::to_string(attempt) + ": " + reason.problem);
    }
    void finished(const RunResult& run) override { finished_cases.push_back(run.cases.back().name); }
};

/// A link that sees the user's request to stop, as real ones do.
class InterruptibleLink final : public Link {
public:
    InterruptibleLink(FakeClock& clock, Peer& peer) : line(clock, peer) {}
    Outcome<Moved> exchange(std::span<const std::byte> to_write, std::span<std::byte> to_fill,
                            Instant deadline) override {
        if (interrupted()) return interrupted_error(name());
        return line.exchange(to_write, to_fill, deadline);
    }
    std::string name() const override { return line.name(); }
    long baud() const override { return line.baud(); }

    FakeLink line;
};

struct RunBench {
    FakeClock clock;
    ModelBoard model;
    TemporaryFolder folder;
    DiskFiles files;
    RememberingObserver observer;
    RunRequest request;
    RunResult run;
    HtmlReport report{""};
    FakeLink* line = nullptr;  ///< the board's, once it greeted

    RunBench() {
        model.filters = {{"average", ModelBoard::Work::average}};
        request.plan = moving_average_plan();
        request.plan.signal.filter = "average";
        request.rig.file = "rig.toml";
        request.rig.name = "bench 3";
        request.rig.port = "fake";
        request.rig.baud = 921600;
        request.rig.block_samples = 64;
        request.rig.answer_s = 2.0;
        request.rig.greet_s = 5.0;
    }

    Plan& plan() { return request.plan; }
    /// Adds a case, judged by half an LSB and an implicit latency rule.
    Case& add_case(const std::string& name, const std::string& shape, const ParameterValues& given) {
        Case made =
            a_case(plan(), shape, given, {rule(plan(), "error", values({{"max_lsb", 0.5}})), implicit_latency()});
        made.name = name;
        request.selected.push_back(plan().cases.size());
        run.cases_planned.push_back(name);
        plan().cases.push_back(std::move(made));
        return plan().cases.back();
    }
    Case& add_noise(const std::string& name, double level_ratio = 0.5, std::int64_t length_samples = 1000) {
        return add_case(
            name, "noise",
            values({{"level_ratio", level_ratio}, {"seed", std::int64_t{3}}, {"length_samples", length_samples}}));
    }

    /// Greets and runs every case; what ended it early.
    Outcome<void> go() {
        auto link = std::make_unique<InterruptibleLink>(clock, model);
        line = &link->line;
        line->set_baud(921600);
        Board board;
        board.link = std::move(link);
        WireLimits limits;
        limits.block_samples = request.rig.block_samples;
        board.wire = make_framed_wire(*board.link, clock, limits, 5);
        auto greeting = board.wire->greet();
        REQUIRE(greeting);
        board.greeting = *greeting;
        auto number = agreeing_filter(board.greeting, plan().signal, "fake line", rate_cycle_of(plan()));
        REQUIRE(number);
        board.filter_number = *number;
        if (before_cases) before_cases();
        auto opened = open_run_folder(files, {clock.utc(), "plan.toml", folder / "run"});
        REQUIRE(opened);
        run_folder = opened->path();
        return run_cases(request, board, run, *opened, report, files, clock, observer);
    }

    std::vector<Code> codes_of(const std::string& file, const SampleFormat& format) const {
        auto bytes = files.read(run_folder + "/" + file, std::size_t{1} << 24);
        REQUIRE(bytes);
        const auto all = std::as_bytes(std::span(*bytes));
        auto header = parse_npy_header(all);
        REQUIRE(header);
        std::vector<Code> codes(static_cast<std::size_t>(header->count * header->channels));
        from_npy_bytes(format, all.subspan(header->data_offset), codes);
        return codes;
    }
    std::vector<Code> captured(std::size_t place) const {
        return codes_of(run.cases.at(place).capture_file, request.plan.signal.output);
    }

    std::function<void()> before_cases;
    std::string run_folder;
};

}  // namespace halflsb::test
