#include "runner/report/terminal_report.hpp"

#include <catch2/catch.hpp>

#include "tests/runner/report/sample_run.hpp"

using namespace halflsb;

namespace {

TextStyle plain(int width = 80) {
    TextStyle style;
    style.width = width;
    return style;
}

}  // namespace

TEST_CASE("report: the lines before the board is touched say version, plan, rig and port", "[report]") {
    CHECK(start_text(sample::run(), plain()) ==
          "halflsb 0.1.0\n"
          "  plan      cw7.toml, CW-7 load-cell filter, release acceptance\n"
          "  rig       bench.toml, checkweigher CW-7, bench 3\n"
          "  port      /dev/ttyUSB0 at 921600 baud\n");
}

TEST_CASE("report: the lines before the first sample say which firmware and what cannot be seen", "[report]") {
    RunResult run = sample::run();
    CHECK(board_text(run, 200.0, plain()) ==
          "  board     serial CW7-0042\n"
          "  firmware  build-id 3fa2b19c, not verified\n"
          "  filter    load-cell, samples enter at call; not seen there: the sampling\n"
          "            interrupt, DMA, the converter and the analogue path\n"
          "  signal    q15 in, q15 out, 1200 Hz\n"
          "  cases     5 cases, 3 min 20 s on the wire\n");

    run.firmware = {FirmwareCheck::State::agrees, "build/cw7.elf", "3fa2b19c", true};
    run.board.injection = "converter";
    run.cases_planned = {"soak"};
    run.board.serial.clear();
    CHECK(board_text(run, std::nullopt, plain(120)) ==
          "  board     no serial number\n"
          "  firmware  build-id 3fa2b19c, agrees with build/cw7.elf (before_run skipped: the board already runs it)\n"
          "  filter    load-cell, samples enter at converter; not seen there: the analogue path\n"
          "  signal    q15 in, q15 out, 1200 Hz\n"
          "  cases     1 case, time on the wire not known\n");
}

TEST_CASE("report: what the program added, assumed and left out stands before the first sample", "[report]") {
    RunResult run = sample::run();
    run.may_end_early = true;
    run.taken.added = {{"silence", "an offset"}, {"noise", ""}};
    run.taken.assumed = {"stage 1: an accumulator as wide as it takes"};
    run.taken.left_out = {{"long \x1b[2J", "faults that are rare"}};
    run.taken.why_left_out = "--all runs it too";
    const std::string text = board_text(run, 200.0, plain());
    CHECK(text.substr(text.find("  cases")) ==
          "  cases     5 cases, at most 3 min 20 s on the wire\n"
          "  standard  the plan has no [[case]], so the standard set is run; each case is\n"
          "            there to find\n"
          "            silence: an offset\n"
          "            noise\n"
          "  assumed   stage 1: an accumulator as wide as it takes\n"
          "  left out  --all runs it too; not covered then\n"
          "            long \\x1b[2J: faults that are rare\n");
}

TEST_CASE("report: each injection point says what it cannot show, an unknown one promises nothing", "[report]") {
    CHECK(not_seen_from("call") == "not seen there: the sampling interrupt, DMA, the converter and the analogue path");
    CHECK(not_seen_from("buffer") == "not seen there: DMA, the converter and the analogue path");
    CHECK(not_seen_from("converter") == "not seen there: the analogue path");
    CHECK(not_seen_from("elsewhere") ==
          "what that point cannot show is not known to this version; the analogue path is never seen");
}

TEST_CASE("report: a passing case is one line with its tightest figures", "[report]") {
    CHECK(case_text(sample::run(), 0, plain()) ==
          "1/5  tare step              pass       max 0.499 LSB of 0.5, latency 0 samples\n");
}

TEST_CASE("report: a plausible capture is never silently taken for a proven one", "[report]") {
    RunResult run = sample::run();
    run.cases[0].grade = Grade::plausible;
    CHECK(case_text(run, 0, plain(110)) ==
          "1/5  tare step              pass       max 0.499 LSB of 0.5, latency 0 samples, capture plausible, not "
          "proven\n");
}

TEST_CASE("report: a failing case shows figures, the first bad sample with neighbours, plan line, rerun", "[report]") {
    CHECK(case_text(sample::run(), 1, plain()) ==
          "2/5  mains hum, half scale  fail       error\n"
          "  error: fail\n"
          "    against the declared reference, asked at cw7.toml:20:3\n"
          "    3 of 2048 samples beyond max\n"
          "    figure    measured      limit       margin\n"
          "    max        1.5 LSB  ≤ 0.5 LSB       -1 LSB  fail\n"
          "    rms     0.2887 LSB  ≤ 0.3 LSB  0.01132 LSB\n"
          "    snr       61.23 dB    ≥ 60 dB      1.23 dB\n"
          "    first bad sample: 1041, at 867.50 ms; reference and error in LSB\n"
          "     index  time ms  stimulus  response  reference   error\n"
          "      1039   865.83     16384     16370  16370.250  -0.250\n"
          "      1040   866.67     16384     16371  16370.750   0.250\n"
          "    > 1041   867.50     16384     16370  16371.500  -1.500\n"
          "      1042   868.33     16384     16371  16371.250  -0.250\n"
          "      1043   869.17     16384     16372  16371.625   0.375\n"
          "  latency: pass, 0 samples\n"
          "  rerun: halflsb check cw7.toml --rig bench.toml --case 'mains hum, half scale'\n");
}

TEST_CASE("report: in 40 columns the tables give way, the command stays whole", "[report]") {
    CHECK(case_text(sample::run(), 1, plain(40)) ==
          "2/5  mains hum, half scale  fail\n"
          "     error\n"
          "  error: fail\n"
          "    against the declared reference,\n"
          "    asked at cw7.toml:20:3\n"
          "    3 of 2048 samples beyond max\n"
          "    max: measured 1.5 LSB, limit ≤ 0.5\n"
          "    LSB, margin -1 LSB, fail\n"
          "    rms: measured 0.2887 LSB, limit ≤\n"
          "    0.3 LSB, margin 0.01132 LSB\n"
          "    snr: measured 61.23 dB, limit ≥ 60\n"
          "    dB, margin 1.23 dB\n"
          "    first bad sample: 1041, at 867.50\n"
          "    ms; reference and error in LSB\n"
          "     index  response  reference   error\n"
          "      1039     16370  16370.250  -0.250\n"
          "      1040     16371  16370.750   0.250\n"
          "    > 1041     16370  16371.500  -1.500\n"
          "      1042     16371  16371.250  -0.250\n"
          "      1043     16372  16371.625   0.375\n"
          "  latency: pass, 0 samples\n"
          "  rerun: halflsb check cw7.toml --rig bench.toml --case 'mains hum, half scale'\n");
    CHECK(case_text(sample::run(), 0, plain(40)) ==
          "1/5  tare step              pass\n"
          "     max 0.499 LSB of 0.5, latency 0\n"
          "     samples\n");
}

TEST_CASE("report: an invalid case says what was awaited and what came instead", "[report]") {
    CHECK(case_text(sample::run(), 2, plain()) ==
          "3/5  belt start             invalid    nothing judged\n"
          "  /dev/ttyUSB0: waited 2 s for block 17, nothing came; the last was block 16,\n"
          "  0.4 s before\n"
          "    check the cable and the board's supply\n"
          "  capture broken: 2048 samples sent, 1024 came back; 2 bad frames here, 3\n"
          "  resends; the board could not be asked for its counters\n"
          "  rerun: halflsb check cw7.toml --rig bench.toml --case 'belt start'\n");
}

TEST_CASE("report: an undecided case says why", "[report]") {
    CHECK(case_text(sample::run(), 3, plain()) ==
          "4/5  dc                     undecided  latency\n"
          "  latency: undecided\n"
          "    against the declared reference, asked at cw7.toml:30:1\n"
          "    the response fits the reference at no lag from -64 to 64 samples\n"
          "    figure       measured        limit  margin\n"
          "    latency  not measured  = 0 samples    none\n"
          "  error: pass, max 0.499 LSB of 0.5\n"
          "  rerun: halflsb check cw7.toml --rig bench.toml --case dc\n");
}

TEST_CASE("report: colour marks the verdict words and nothing else", "[report]") {
    TextStyle style = plain();
    style.colour = true;
    CHECK(case_text(sample::run(), 0, style) ==
          "1/5  tare step              \x1b[32mpass\x1b[0m       max 0.499 LSB of 0.5, latency 0 samples\n");
    std::string stripped = case_text(sample::run(), 1, style);
    for (const std::string code : {"\x1b[1;31m", "\x1b[0m"}) {
        for (std::size_t at = 0; (at = stripped.find(code)) != std::string::npos;) stripped.erase(at, code.size());
    }
    CHECK(stripped == case_text(sample::run(), 1, plain()));
}

TEST_CASE("report: without unicode our own signs are ASCII", "[report]") {
    TextStyle style = plain();
    style.unicode = false;
    const std::string text = case_text(sample::run(), 1, style);
    CHECK(text.find("    max        1.5 LSB  <= 0.5 LSB       -1 LSB  fail\n") != std::string::npos);
    CHECK(text.find("    snr       61.23 dB    >= 60 dB      1.23 dB\n") != std::string::npos);
    for (const char c : text) REQUIRE(static_cast<unsigned char>(c) < 0x80);
}

TEST_CASE("report: f32 codes are shown as their values", "[report]") {
    RunResult run = sample::run();
    run.signal.input = run.signal.output = sample::f32();
    Neighbourhood& around = *run.cases[1].rules[0].first_bad;
    around.index = around.first_index = 7;
    around.stimulus = {0x3F800000};  // 1.0
    around.response = {0x3F000000};  // 0.5
    around.reference = {0.75};
    const std::string text = case_text(run, 1, plain());
    CHECK(text.find("    first bad sample: 7, at 5.83 ms\n"
                    "    index  time ms  stimulus  response  reference  error\n"
                    "      > 7     5.83         1       0.5       0.75  -0.25\n") != std::string::npos);
}

TEST_CASE("report: neighbours that are missing are dashes, not a crash", "[report]") {
    RunResult run = sample::run();
    Neighbourhood& around = *run.cases[1].rules[0].first_bad;
    around.stimulus.resize(1);
    around.response.resize(2);
    around.reference.resize(3);
    const std::string text = case_text(run, 1, plain());
    CHECK(text.find("    > 1041   867.50         -         -  16371.500       -\n") != std::string::npos);
}

TEST_CASE("report: text of a plan or a board cannot write escape sequences", "[report]") {
    RunResult run = sample::run();
    const std::string evil = "a\x1b[2J\r\n\x7f\xc2\x9b\xff\u202e";
    const std::string shown = "a\\x1b[2J\\x0d\\x0a\\x7f\\x9b\\xff\\u202e";
    run.title = run.plan_file = run.rig_file = run.board.link = run.board.rig_name = evil;
    run.board.serial = run.board.build_id = run.board.filter = run.board.injection = evil;
    run.folder = evil;
    run.warnings = {evil};
    run.cases[1].name = run.cases_planned[1] = evil;
    run.cases[1].rerun = evil;
    RuleVerdict& rule = run.cases[1].rules[0];
    rule.reference = rule.reason = rule.rule.position.file = evil;
    rule.figures[0].name = rule.figures[0].unit = rule.figures[0].note = evil;
    run.cases[2].invalid = Error{ErrorKind::bench, evil, evil, evil};
    run.ended_by = run.cases[2].invalid;

    std::string all = start_text(run, plain(200)) + board_text(run, 1.0, plain(200)) + summary_text(run, plain(200)) +
                      error_text(*run.ended_by, plain(200));
    for (std::size_t i = 0; i < run.cases.size(); ++i) all += case_text(run, i, plain(200));
    for (const char c : all) {
        const bool control = static_cast<unsigned char>(c) < 0x20 && c != '\n';
        REQUIRE_FALSE(control);
        REQUIRE(c != '\x7f');
        REQUIRE(c != '\xff');
    }
    CHECK(all.find("\u202e") == std::string::npos);
    CHECK(all.find("\xc2\x9b") == std::string::npos);
    CHECK(start_text(run, plain(200)).find("  port      " + shown + "\n") != std::string::npos);
}

TEST_CASE("report: the summary counts, names what was not verified, and ends in the caution", "[report]") {
    CHECK(summary_text(sample::run(), plain()) ==
          "1 pass, 1 fail, 1 invalid, 1 undecided, 1 not run\n"
          "firmware not verified: --image FILE compares the board's build-id with a file's\n"
          "run folder: .halflsb/20261201T093000Z-cw7\n"
          "evidence about the filter on the tested unit at its injection point, not a\n"
          "safety approval\n");
}

TEST_CASE("report: a clean run's summary has nothing to add", "[report]") {
    RunResult run = sample::run();
    run.cases.resize(1);
    run.cases_planned.resize(1);
    run.firmware.state = FirmwareCheck::State::agrees;
    TextStyle style = plain(120);
    style.colour = true;
    CHECK(summary_text(run, style) ==
          "\x1b[32m1 pass\x1b[0m, 0 fail, 0 invalid, 0 undecided, 0 not run\n"
          "run folder: .halflsb/20261201T093000Z-cw7\n"
          "evidence about the filter on the tested unit at its injection point, not a safety approval\n");
}

TEST_CASE("report: an interrupted run says so, and that no latency was told", "[report]") {
    RunResult run = sample::run();
    run.cases.erase(run.cases.begin(), run.cases.begin() + 2);
    run.cases.resize(1);
    run.warnings = {"the rig bench.toml lies in the plan's repository"};
    run.ended_by =
        Error{ErrorKind::interrupted, "", "interrupted by INT during case 2 of 5", "the finished case is kept"};
    CHECK(summary_text(run, plain()) ==
          "warning: the rig bench.toml lies in the plan's repository\n"
          "stopped: interrupted by INT during case 2 of 5\n"
          "  the finished case is kept\n"
          "0 pass, 0 fail, 1 invalid, 0 undecided, 4 not run\n"
          "latency not verified: no case that ran could tell its latency\n"
          "firmware not verified: --image FILE compares the board's build-id with a file's\n"
          "run folder: .halflsb/20261201T093000Z-cw7\n"
          "evidence about the filter on the tested unit at its injection point, not a\n"
          "safety approval\n");
}

TEST_CASE("report: an error keeps its lines, so that a caret stays below its column", "[report]") {
    const Error error{ErrorKind::input, "cw7.toml:2:8", "no such word 'pionts'\n  pionts = 16\n  ^~~~~~",
                      "write points"};
    CHECK(error_text(error, plain(40)) ==
          "halflsb: cw7.toml:2:8: no such word 'pionts'\n  pionts = 16\n  ^~~~~~\n  write points\n");
}

TEST_CASE("report: the cautions are whole sentences in lines that fit", "[report]") {
    CHECK(cautions_text(plain()) ==
          "A stimulus can move what is wired to the board: disconnect actuators, mains,\n"
          "patients and loads first.\n"
          "isolated = true in the rig file is a statement by the person who wired it;\n"
          "without it nothing is streamed.\n"
          "A passing report is evidence about the filter on the tested unit at its\n"
          "injection point, not a safety approval.\n"
          "Local codes and licensed practice decide whether a device may be used.\n");
}

TEST_CASE("terminal report: how a case was captured stands below its line, where it is not as usual", "[report]") {
    RunResult run = sample::run();
    run.attempts_allowed = 3;
    CaseResult& result = run.cases[0];
    result.start = Start::flush;
    result.start_samples = 1234;
    result.settings = {{"average-points", 8, {}}, {"gain", -1, {}}};
    result.rate_hz = 600.0;
    AttemptResult attempt;
    attempt.invalid = {ErrorKind::bench, "/dev/ttyUSB0", "the board was silent for 2 s", "check the cable"};
    result.attempts = {attempt};
    TextStyle style;
    style.width = 100;
    const std::string text = case_text(run, 0, style);
    CHECK(text.substr(text.find('\n') + 1) ==
          "  start     flush, 1234 zeros first\n"
          "  settings  average-points = 8, gain = -1\n"
          "  rate      600 Hz\n"
          "  attempts  attempt 2 of 3; attempt 1 was invalid: the board was silent for 2 s\n");
    result.start = Start::running;
    result.start_samples = 1;
    CHECK(case_text(run, 0, style).find("  start     running, the first 1 sample is judged by no rule\n") !=
          std::string::npos);
}

TEST_CASE("terminal report: a rule of one channel of several says which", "[report]") {
    RunResult run = sample::run();
    run.signal.channels = 2;
    run.cases[1].rules[0].channel = 2;
    run.cases[1].rules[1].channel = 1;
    TextStyle style;
    style.width = 100;
    const std::string text = case_text(run, 1, style);
    CHECK(text.find("  error, channel 2: fail\n") != std::string::npos);
    CHECK(text.find("  latency, channel 1: pass, 0 samples\n") != std::string::npos);
    run.cases[0].rules[0].channel = 2;
    CHECK(case_text(run, 0, style).find("max 0.499 LSB of 0.5 on channel 2") != std::string::npos);
    CHECK(board_text(run, std::nullopt, style).find("q15 in, q15 out, 1200 Hz, 2 channels\n") != std::string::npos);
}

TEST_CASE("terminal report: a response that changed is compared with the accepted run", "[report]") {
    RunResult run = sample::run();
    RuleVerdict& rule = run.cases[1].rules[0];
    rule.rule.kind = UnchangedRule{"baseline", std::nullopt, nullptr, {}};
    rule.reference = "accepted";
    const std::string text = case_text(run, 1, TextStyle{});
    CHECK(text.find("  unchanged: fail\n    against the accepted run, asked at cw7.toml:20:3\n") != std::string::npos);
}

TEST_CASE("terminal report: several rigs end in a table", "[report]") {
    TextStyle style;
    style.width = 100;
    CHECK(rigs_text({{"a.toml", {2, 0, 0, 0, 0}, "runs/a", 0},
                     {"b.toml", {1, 1, 0, 0, 0}, "runs/b", 1},
                     {"c.toml", {}, "", {}}},
                    style) ==
          "3 rigs\n"
          "  rig     pass  fail  invalid  undecided  not run   status  run folder\n"
          "  a.toml     2     0        0          0        0        0  runs/a\n"
          "  b.toml     1     1        0          0        0        1  runs/b\n"
          "  c.toml     -     -        -          -        -  not run  -\n");
}

TEST_CASE("terminal report: captures judged again say where they are from", "[report]") {
    RunResult run = sample::run();
    run.folder = "runs/a";
    TextStyle style;
    style.width = 100;
    const std::string text = judged_text(run, "0.1.0", true, style);
    CHECK(text.rfind("  run       runs/a, captured 2026-12-01T09:30:00Z by halflsb 0.1.0\n"
                     "  plan      cw7.toml, CW-7 load-cell filter, release acceptance, as recorded\n",
                     0) == 0);
    CHECK(text.find("wire") == std::string::npos);
    CHECK(judged_text(run, "0.1.0", false, style).find("as recorded") == std::string::npos);
}

TEST_CASE("terminal report: what blocks took stands where a rule is about time", "[report]") {
    RunResult run = sample::run();
    CaseResult& result = run.cases[0];
    result.stream.ticks_per_sample = Spread{23.44, 31.0, 2140.7};
    result.stream.round_trip_s = Spread{0.0042, 0.005, 0.0123456};
    TextStyle style;
    style.width = 120;
    CHECK(case_text(run, 0, style).find("  time ") == std::string::npos);  // its latency rule is implicit
    result.rules[0].rule.kind = DeadlineRule{};
    CHECK(
        case_text(run, 0, style)
            .find(
                "  time      of a sample on the board median 23.4, 99 % 31, most 2141 ticks; of a block there and back "
                "median 4.2, 99 %\n  5, most 12.3 ms\n") != std::string::npos);
    result.stream.ticks_per_sample.reset();
    result.rules[0].rule.kind = LatencyRule{};
    CHECK(case_text(run, 0, style).find("  time      of a block there and back median 4.2, 99 % 5, most 12.3 ms\n") !=
          std::string::npos);
}
