// A run of an invented checkweigher with one case of each verdict, for the tests of report, record
// and cli.
#pragma once

#include <string>
#include <utility>

#include "runner/world/result.hpp"

namespace halflsb::sample {

inline SampleFormat q15() { return {"q15", FormatFamily::q, 16, 15, 1}; }
inline SampleFormat f32() { return {"f32", FormatFamily::f, 32, 0, 5}; }

inline Rule error_rule(int line) {
    ErrorRule error;
    error.largest = Limit{0.5, Limit::In::lsb};
    return {error, {"cw7.toml", line, 3}};
}

inline Rule latency_rule(int line) { return {LatencyRule{0, true}, {"cw7.toml", line, 1}}; }

inline JudgedFigure figure(std::string name, double value, double limit, std::string unit, bool at_least = false) {
    const double margin = at_least ? value - limit : limit - value;
    return {std::move(name), value, limit, margin, std::move(unit), at_least, pass_or_fail(margin >= 0.0), ""};
}

inline RuleVerdict latency_passed(int line) {
    return {latency_rule(line), Verdict::pass, "declared", {figure("latency", 0, 0, "samples")}, "", std::nullopt};
}

inline RuleVerdict error_passed(int line) {
    return {error_rule(line), Verdict::pass, "declared", {figure("max", 0.499, 0.5, "LSB")}, "", std::nullopt};
}

inline RuleVerdict error_failed(int line) {
    Neighbourhood around;
    around.index = 1041;
    around.first_index = 1039;
    around.stimulus = {16384, 16384, 16384, 16384, 16384};
    around.response = {16370, 16371, 16370, 16371, 16372};
    around.reference = {16370.25, 16370.75, 16371.5, 16371.25, 16371.625};
    return {
        error_rule(line),
        Verdict::fail,
        "declared",
        {figure("max", 1.5, 0.5, "LSB"), figure("rms", 0.2886751, 0.3, "LSB"), figure("snr", 61.23, 60, "dB", true)},
        "3 of 2048 samples beyond max",
        around};
}

inline CaseResult passed_case() {
    CaseResult result;
    result.number = 1;
    result.name = "tare step";
    result.verdict = CaseVerdict::pass;
    result.grade = Grade::proven;
    result.rules = {error_passed(12), latency_passed(8)};
    result.latency_told = true;
    result.stream.samples_sent = result.stream.samples_received = 2048;
    result.stream.bytes_to_board = 4400;
    result.stream.bytes_to_host = 4500;
    result.stream.streaming_s = 0.25;
    result.stream.line_use_ratio = 0.97;
    result.started_utc = "2026-12-01T09:30:01Z";
    result.elapsed_s = 0.3;
    result.capture_file = "captures/001-tare-step.npy";
    result.capture_sha256 = std::string(64, 'a');
    result.rerun = "halflsb check cw7.toml --rig bench.toml --case 'tare step'";
    return result;
}

inline CaseResult failed_case() {
    CaseResult result = passed_case();
    result.number = 2;
    result.name = "mains hum, half scale";
    result.verdict = CaseVerdict::fail;
    result.rules = {error_failed(20), latency_passed(16)};
    result.capture_file = "captures/002-mains-hum-half-scale.npy";
    result.rerun = "halflsb check cw7.toml --rig bench.toml --case 'mains hum, half scale'";
    return result;
}

inline CaseResult invalid_case() {
    CaseResult result = passed_case();
    result.number = 3;
    result.name = "belt start";
    result.verdict = CaseVerdict::invalid;
    result.grade = Grade::broken;
    result.rules.clear();
    result.latency_told = false;
    result.invalid = Error{ErrorKind::bench, "/dev/ttyUSB0",
                           "waited 2 s for block 17, nothing came; the last was block 16, 0.4 s before",
                           "check the cable and the board's supply"};
    result.stream.samples_received = 1024;
    result.stream.frames_bad_at_host = 2;
    result.stream.resends = 3;
    result.capture_file.clear();
    result.capture_sha256.clear();
    result.rerun = "halflsb check cw7.toml --rig bench.toml --case 'belt start'";
    return result;
}

inline CaseResult undecided_case() {
    CaseResult result = passed_case();
    result.number = 4;
    result.name = "dc";
    result.verdict = CaseVerdict::undecided;
    RuleVerdict latency = latency_passed(30);
    latency.rule.kind = LatencyRule{0, false};
    latency.verdict = Verdict::undecided;
    latency.figures = {{"latency", std::nullopt, 0.0, std::nullopt, "samples", false, Verdict::pass, ""}};
    latency.reason = "the response fits the reference at no lag from -64 to 64 samples";
    result.rules = {error_passed(28), latency};
    result.capture_file = "captures/004-dc.npy";
    result.rerun = "halflsb check cw7.toml --rig bench.toml --case dc";
    return result;
}

/// All four cases; a fifth was planned.
inline RunResult run() {
    RunResult run;
    run.tool_version = "0.1.0";
    run.started_utc = "2026-12-01T09:30:00Z";
    run.title = "CW-7 load-cell filter, release acceptance";
    run.plan_file = "cw7.toml";
    run.rig_file = "bench.toml";
    run.plan_text = "title = \"CW-7\"\n";
    run.rig_text = "[board]\n";
    run.plan_sha256 = std::string(64, 'b');
    run.rig_sha256 = std::string(64, 'c');
    run.signal.rate_hz = 1200.0;
    run.signal.input = run.signal.output = q15();
    run.signal.filter = "load-cell";
    run.board.rig_name = "checkweigher CW-7, bench 3";
    run.board.link = "/dev/ttyUSB0 at 921600 baud";
    run.board.serial = "CW7-0042";
    run.board.build_id = "3fa2b19c";
    run.board.filter = "load-cell";
    run.board.injection = "call";
    run.board.block_samples = 256;
    run.board.credit_blocks = 4;
    run.board.tick_hz = 168000000;
    run.cases_planned = {"tare step", "mains hum, half scale", "belt start", "dc", "soak"};
    run.cases = {passed_case(), failed_case(), invalid_case(), undecided_case()};
    run.folder = ".halflsb/20261201T093000Z-cw7";
    run.elapsed_s = 1.5;
    return run;
}

}  // namespace halflsb::sample
