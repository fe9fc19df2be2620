// Cases on the model board: how they start, what is recorded of them, and how often they run.
#include <filesystem>

#include "oracle/judge/block_ticks.hpp"
#include "runner/world/sha256.hpp"
#include "tests/runner/run_bench.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

std::string digest_of(const SampleFormat& format, const std::vector<Code>& codes) {
    auto digest = make_code_digest();
    digest->add(format, codes);
    return digest->value();
}

std::vector<Code> stimulus_codes(const Plan& plan, const Case& the_case) {
    std::vector<Code> codes(static_cast<std::size_t>(the_case.stimulus->length_samples() * plan.signal.channels));
    fill_case_codes(plan, the_case, 0, codes);
    return codes;
}

/// What a 16-point mean in Q15 returns for `codes` after it has seen `before`.
std::vector<Code> mean_after(std::vector<Code> before, const std::vector<Code>& codes) {
    before.insert(before.end(), codes.begin(), codes.end());
    std::vector<Code> means;
    for (std::size_t n = before.size() - codes.size(); n < before.size(); ++n) {
        long sum = 8;
        for (std::size_t k = n >= 15 ? n - 15 : 0; k <= n; ++k) sum += before[k];
        means.push_back(static_cast<Code>(sum >> 4));
    }
    return means;
}

int files_in(const std::string& folder) {
    int count = 0;
    for ([[maybe_unused]] const auto& entry : std::filesystem::directory_iterator(folder)) ++count;
    return count;
}

}  // namespace

TEST_CASE("start: reset opens a stream for each case", "[run]") {
    RunBench bench;
    bench.add_noise("loud");
    bench.add_noise("again");
    REQUIRE(bench.go());
    CHECK(bench.model.starts == 2);
    CHECK(bench.captured(0) == bench.captured(1));
    for (const CaseResult& result : bench.run.cases) {
        CHECK(result.verdict == CaseVerdict::pass);
        CHECK(result.start == Start::reset);
        CHECK(result.stream.samples_sent == 1000);
        CHECK(result.stimulus.shape == "noise");
        CHECK(result.stimulus.values.integer(*find_recipe(stimulus_recipes(), "noise"), "seed") == 3);
        CHECK(result.stimulus.samples == 1000);
        CHECK(result.stimulus.file.empty());
        CHECK(result.stimulus.sha256 ==
              digest_of(bench.plan().signal.input, stimulus_codes(bench.plan(), bench.plan().cases[0])));
        CHECK(result.attempts.empty());
    }
    CHECK_FALSE(std::filesystem::exists(bench.run_folder + "/stimuli"));
}

TEST_CASE("start: flush sends zeros in the open stream, which nobody records or judges", "[run]") {
    RunBench bench;
    bench.add_noise("loud", 0.9);
    Case& quiet = bench.add_noise("quiet", 0.01, 300);
    quiet.start = Start::flush;
    quiet.start_samples = 100;
    SECTION("enough of them: the filter is as after a reset") {
        REQUIRE(bench.go());
        CHECK(bench.run.cases[1].verdict == CaseVerdict::pass);
        CHECK(bench.model.starts == 1);
    }
    SECTION("too few: what the loud case left shows") {
        quiet.start_samples = 5;
        REQUIRE(bench.go());
        CHECK(bench.run.cases[1].verdict == CaseVerdict::fail);
        CHECK(bench.model.starts == 1);
    }
    const CaseResult& result = bench.run.cases[1];
    CHECK(result.start == Start::flush);
    CHECK(result.start_samples == quiet.start_samples);
    CHECK(result.stream.samples_sent == 300 + quiet.start_samples);
    CHECK(result.stream.samples_received == 300 + quiet.start_samples);
    CHECK(bench.model.processed_samples == 1000 + 300 + quiet.start_samples);
    CHECK(bench.captured(1).size() == 300);
    // Ticks are 100 a sample on this board: those of the zeros are not the stimulus's.
    CHECK(result.stream.ticks_total == 300 * 100);
    CHECK(result.stimulus.samples == 300);
    CHECK(result.stimulus.sha256 == digest_of(bench.plan().signal.input, stimulus_codes(bench.plan(), quiet)));
    // Progress counts what travels.
    CHECK(bench.observer.steps.back() == std::pair{300 + quiet.start_samples, 300 + quiet.start_samples});
    // Blocks of 64: 5 or 2 of zeros, 5 of the stimulus; bytes of both count.
    CHECK(result.stream.bytes_to_board > 2 * (300 + quiet.start_samples));
    CHECK(result.stream.bytes_to_board < 2 * (300 + quiet.start_samples) + 10 * (5 + 2));
}

TEST_CASE("start: flush of a first case opens the stream itself", "[run]") {
    RunBench bench;
    Case& only = bench.add_noise("only");
    only.start = Start::flush;
    only.start_samples = 15;
    REQUIRE(bench.go());
    CHECK(bench.model.starts == 1);
    CHECK(bench.run.cases[0].verdict == CaseVerdict::pass);
}

TEST_CASE("start: zeros of an unsigned format are its mid-code", "[run]") {
    const auto u16 = sample_format("u16");
    REQUIRE(u16);
    RunBench bench;
    bench.model.filters[0].input = bench.model.filters[0].output = u16->wire_number;
    bench.plan().signal.input = bench.plan().signal.output = *u16;
    bench.add_noise("loud", 0.9);
    Case& quiet = bench.add_noise("quiet", 0.01, 300);
    quiet.start = Start::flush;
    quiet.start_samples = 15;
    REQUIRE(bench.go());
    CHECK(bench.run.cases[0].verdict == CaseVerdict::pass);
    CHECK(bench.run.cases[1].verdict == CaseVerdict::pass);
    CHECK(bench.model.starts == 1);
}

TEST_CASE("start: running goes on where the case before ended, and all of it is recorded", "[run]") {
    RunBench bench;
    bench.add_noise("loud", 0.9);
    Case& next = bench.add_noise("next", 0.01, 300);
    next.start = Start::running;
    next.start_samples = 15;
    REQUIRE(bench.go());
    CHECK(bench.model.starts == 1);
    const Plan& plan = bench.plan();
    CHECK(bench.captured(1) == mean_after(stimulus_codes(plan, plan.cases[0]), stimulus_codes(plan, plan.cases[1])));
    const CaseResult& result = bench.run.cases[1];
    CHECK(result.start_samples == 15);
    CHECK(result.stream.samples_sent == 300);
    CHECK(result.stream.bytes_to_board < 2 * 300 + 10 * 5);
    CHECK(result.stream.ticks_total == 300 * 100);
}

TEST_CASE("start: running opens a stream where none is open", "[run]") {
    RunBench bench;
    Case& only = bench.add_noise("only");
    only.start = Start::running;
    only.start_samples = 15;
    REQUIRE(bench.go());
    CHECK(bench.model.starts == 1);
    CHECK(bench.captured(0) == mean_after({}, stimulus_codes(bench.plan(), bench.plan().cases[0])));
}

TEST_CASE("settings: a case runs with its own, the next with what the board had", "[run]") {
    RunBench bench;
    bench.model.settings = {{"average-points", 1, 64, 16}};
    bench.add_noise("as it is");
    bench.add_noise("one point").settings = {{"average-points", 1, {"plan.toml", 30, 1}}};
    bench.add_noise("as it is again");
    bench.add_noise("last").settings = {{"average-points", 4, {"plan.toml", 40, 1}}};
    REQUIRE(bench.go());
    // The plan says 16 points: the first and third case pass.
    CHECK(bench.run.cases[0].verdict == CaseVerdict::pass);
    CHECK(bench.run.cases[1].verdict == CaseVerdict::fail);
    CHECK(bench.captured(1) == stimulus_codes(bench.plan(), bench.plan().cases[1]));
    CHECK(bench.run.cases[2].verdict == CaseVerdict::pass);
    CHECK(bench.run.cases[3].verdict == CaseVerdict::fail);
    REQUIRE(bench.run.cases[1].settings.size() == 1);
    CHECK(bench.run.cases[1].settings[0].value == 1);
    // And back at the end.
    CHECK(bench.model.settings[0].value == 16);
    CHECK(bench.model.settings_made ==
          std::vector<std::pair<std::string, std::int32_t>>{
              {"average-points", 1}, {"average-points", 16}, {"average-points", 4}, {"average-points", 16}});
    CHECK(bench.observer.warnings.empty());
}

TEST_CASE("settings: they change before the zeros that flush", "[run]") {
    RunBench bench;
    bench.model.settings = {{"average-points", 1, 64, 64}};
    bench.add_noise("loud", 0.9);
    Case& quiet = bench.add_noise("quiet", 0.01, 300);
    quiet.start = Start::flush;
    quiet.start_samples = 64;
    quiet.settings = {{"average-points", 16, {"plan.toml", 30, 1}}};
    REQUIRE(bench.go());
    CHECK(bench.model.starts == 1);
    CHECK(bench.run.cases[1].verdict == CaseVerdict::pass);
    // Acknowledged before the first zero counts.
    CHECK(bench.run.cases[1].stream.bytes_to_board < 2 * 364 + 10 * 6);
}

TEST_CASE("settings: one that the board does not have ends the run before its first sample", "[run]") {
    RunBench bench;
    bench.add_noise("first");
    bench.add_noise("second").settings = {{"gain", 1, {"plan.toml", 30, 1}}};
    const auto ran = bench.go();
    REQUIRE_FALSE(ran);
    CHECK(ran.error().kind == ErrorKind::bench);
    CHECK_THAT(ran.error().problem, Catch::StartsWith("the board has no setting \"gain\""));
    CHECK(bench.run.cases.empty());
    CHECK(bench.model.processed_samples == 0);
    CHECK(bench.observer.greetings == 0);
}

TEST_CASE("settings: they are put back after an interruption as well", "[run]") {
    RunBench bench;
    bench.model.settings = {{"average-points", 1, 64, 16}};
    bench.add_noise("changes").settings = {{"average-points", 4, {"plan.toml", 30, 1}}};
    bench.model.instead = [&](std::uint8_t type, const Bytes&, Bytes&) {
        if (type == 0x10 && bench.model.processed_blocks == 3) request_interrupt();
        return false;
    };
    const auto ran = bench.go();
    const bool still_interrupted = interrupted();
    forget_interrupt();
    REQUIRE_FALSE(ran);
    CHECK(ran.error().kind == ErrorKind::interrupted);
    CHECK(still_interrupted);
    CHECK(bench.run.cases.empty());
    CHECK(bench.model.settings_made.back() == std::pair<std::string, std::int32_t>{"average-points", 16});
    CHECK(bench.observer.warnings.empty());
    CHECK(files_in(bench.run_folder + "/captures") == 0);
}

TEST_CASE("settings: a board that cannot take them back any more is told of, within a second", "[run]") {
    RunBench bench;
    bench.model.settings = {{"average-points", 1, 64, 16}};
    bench.add_noise("changes").settings = {{"average-points", 4, {"plan.toml", 30, 1}}};
    Instant silent_since{};
    bench.model.instead = [&](std::uint8_t type, const Bytes&, Bytes&) {
        if (type == 0x10 && bench.model.processed_blocks == 3 && !interrupted()) {
            request_interrupt();
            silent_since = bench.clock.now();
        }
        return bench.model.processed_blocks >= 3;
    };
    const auto ran = bench.go();
    forget_interrupt();
    REQUIRE_FALSE(ran);
    CHECK(ran.error().kind == ErrorKind::interrupted);
    CHECK(to_seconds(bench.clock.now() - silent_since) < 1.0);
    REQUIRE(bench.run.warnings.size() == 1);
    CHECK_THAT(bench.run.warnings[0],
               Catch::StartsWith("the board keeps settings that this run changed: average-points (16 at the start, now "
                                 "4); awaited the board's greeting for 0.4 s"));
    CHECK(bench.observer.warnings == bench.run.warnings);
}

TEST_CASE("channels: codes of all are sent, recorded and counted in instants", "[run]") {
    RunBench bench;
    bench.model.filters[0].channels_in = bench.model.filters[0].channels_out = 2;
    bench.plan().signal.channels = 2;
    bench.add_noise("both");
    bench.add_noise("left").channel = 1;
    REQUIRE(bench.go());
    CHECK(bench.run.board.channels == 2);
    for (const std::size_t place : {0U, 1U}) {
        const CaseResult& result = bench.run.cases[place];
        const std::vector<Code> sent = stimulus_codes(bench.plan(), bench.plan().cases[place]);
        CHECK(result.stream.samples_sent == 1000);
        CHECK(result.stream.samples_received == 1000);
        CHECK(result.stimulus.samples == 1000);
        CHECK(result.stimulus.sha256 == digest_of(bench.plan().signal.input, sent));
        const std::vector<Code> captured = bench.captured(place);
        REQUIRE(captured.size() == 2000);
        for (const std::size_t channel : {0U, 1U}) {
            std::vector<Code> in, out;
            for (std::size_t n = 0; n < 1000; ++n) {
                in.push_back(sent[2 * n + channel]);
                out.push_back(captured[2 * n + channel]);
            }
            CHECK(out == mean_after({}, in));
            const bool is_silent = std::all_of(in.begin(), in.end(), [](Code code) { return code == 0; });
            CHECK(is_silent == (place == 1 && channel == 1));
        }
    }
    const auto bytes = bench.files.read(bench.run_folder + "/" + bench.run.cases[0].capture_file, 1 << 20);
    REQUIRE(bytes);
    CHECK(bytes->find("'shape': (1000, 2)") != std::string::npos);
    CHECK(bench.observer.steps.back() == std::pair<std::int64_t, std::int64_t>{1000, 1000});
    // Twice the words: 256 samples of 2 x 2 bytes and 14 bytes of frame back, in blocks of 64.
    REQUIRE(bench.observer.wire_s);
    CHECK_THAT(*bench.observer.wire_s, Catch::WithinRel(2 * (1000.0 * 4 + 16 * 16) * 10 / 921600, 0.01));
}

TEST_CASE("wire time: the zeros of a flush count", "[run]") {
    RunBench bench;
    bench.add_noise("a");
    Case& flushed = bench.add_noise("b");
    flushed.start = Start::flush;
    flushed.start_samples = 6400;
    REQUIRE(bench.go());
    REQUIRE(bench.observer.wire_s);
    // 16-bit words in blocks of 64: RESPONSE has 144 bytes.
    CHECK_THAT(*bench.observer.wire_s, Catch::WithinRel((2 * 1000 + 6400) / 64.0 * 144 * 10 / 921600, 0.01));
}

TEST_CASE("stimulus: an explicit one is kept beside the captures", "[run]") {
    RunBench bench;
    SignalFile logged;
    logged.path = "stimuli/tare.npy";
    logged.whole_numbers = true;
    logged.columns.resize(1);
    for (int n = 0; n < 500; ++n) logged.columns[0].push_back((n * 7919) % 20011 - 10000);
    bench.add_noise("a recipe");
    Case& from_file =
        bench.add_case("from a file", "file", values({{"file", std::make_shared<const SignalFile>(logged)}}));
    from_file.start = Start::flush;
    from_file.start_samples = 40;
    REQUIRE(bench.go());
    CHECK(bench.run.cases[0].stimulus.file.empty());
    const StimulusFacts& facts = bench.run.cases[1].stimulus;
    CHECK(facts.shape == "file");
    CHECK(facts.file == "stimuli/002-from-a-file.npy");
    const std::vector<Code> kept = bench.codes_of(facts.file, bench.plan().signal.input);
    REQUIRE(kept.size() == 500);
    for (std::size_t n = 0; n < kept.size(); ++n) REQUIRE(kept[n] == static_cast<Code>(logged.columns[0][n]));
    CHECK(facts.sha256 == digest_of(bench.plan().signal.input, kept));
    CHECK(files_in(bench.run_folder + "/stimuli") == 1);
}

TEST_CASE("stimulus: one that was not all sent is not kept", "[run]") {
    RunBench bench;
    SignalFile logged;
    logged.path = "tare.csv";
    logged.whole_numbers = true;
    logged.columns = {std::vector<double>(5000, 100.0)};
    bench.add_case("cut", "file", values({{"file", std::make_shared<const SignalFile>(logged)}}));
    bench.model.instead = [&](std::uint8_t type, const Bytes&, Bytes&) {
        return type == 0x10 && bench.model.processed_blocks >= 3;
    };
    REQUIRE(bench.go());
    CHECK(bench.run.cases[0].verdict == CaseVerdict::invalid);
    CHECK(bench.run.cases[0].stimulus.sha256.empty());
    CHECK(bench.run.cases[0].stimulus.file.empty());
    CHECK(files_in(bench.run_folder + "/stimuli") == 0);
}

TEST_CASE("run cases: the board's ticks are judged, kept and counted where a rule asks for them", "[run]") {
    for (const double limit : {107.0, 106.0}) {
        RunBench bench;
        Case& the_case = bench.add_noise("belt", 0.5, 1000);
        the_case.rules.push_back(test::rule(bench.plan(), "deadline", values({{"max_ticks", limit}})));
        bench.add_noise("plain");
        REQUIRE(bench.go());
        const CaseResult& result = bench.run.cases.at(0);
        CHECK(result.verdict == (limit == 107.0 ? CaseVerdict::pass : CaseVerdict::fail));
        CHECK(result.ticks_file == "ticks/001-belt.npy");
        const auto blocks = ticks_of_codes(bench.codes_of(result.ticks_file, format_of_ticks()));
        REQUIRE(blocks.size() == 16);  // of 64 samples
        CHECK(blocks[0] == BlockTicks{64, 6400, 107});
        CHECK(blocks[15] == BlockTicks{40, 4000, 107});
        REQUIRE(result.stream.ticks_per_sample);
        CHECK(result.stream.ticks_per_sample->median == 100.0);
        CHECK(result.stream.ticks_per_sample->largest == 100.0);
        REQUIRE(result.stream.round_trip_s);
        CHECK(result.stream.round_trip_s->median > 0.0);
        CHECK(result.stream.round_trip_s->largest < result.stream.streaming_s);
        CHECK(bench.run.cases.at(1).ticks_file.empty());
        CHECK(bench.run.cases.at(1).stream.ticks_per_sample);
    }
}
