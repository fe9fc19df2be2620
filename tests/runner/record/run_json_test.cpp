#include "runner/record/run_json.hpp"

#include <catch2/catch.hpp>
#include <clocale>
#include <cmath>
#include <limits>
#include <memory>
#include <nlohmann/json.hpp>
#include <random>

#include "runner/record/json_text.hpp"
#include "tests/runner/report/sample_run.hpp"

using namespace halflsb;
using Json = nlohmann::ordered_json;

namespace {

Json parsed(const RunResult& run, bool finished = true) { return Json::parse(run_json(run, finished)); }

}  // namespace

TEST_CASE("run.json: versioned, with the run's facts under keys that hold their units", "[record]") {
    RunResult run = sample::run();
    run.seed = 18446744073709551615u;
    run.warnings = {"one", "two"};
    const Json json = parsed(run);
    CHECK(json.at("format") == "halflsb run");
    CHECK(json.at("format_version") == 2);
    CHECK(json.at("tool_version") == "0.1.0");
    CHECK(json.at("finished") == true);
    CHECK(parsed(run, false).at("finished") == false);
    CHECK(json.at("started_utc") == "2026-12-01T09:30:00Z");
    CHECK(json.at("elapsed_s") == 1.5);
    CHECK(json.at("plan") ==
          Json{{"file", "cw7.toml"}, {"sha256", std::string(64, 'b')}, {"root", nullptr}, {"files", Json::array()}});
    CHECK(json.at("rig") == Json{{"file", "bench.toml"}, {"sha256", std::string(64, 'c')}});
    CHECK(json.at("seed") == 18446744073709551615u);
    CHECK(json.at("verdict").at("signal").at("rate_hz") == 1200.0);
    CHECK(json.at("verdict").at("signal").at("input") == "q15");
    CHECK(json.at("verdict").at("signal").at("unit").is_null());
    CHECK(json.at("verdict").at("signal").at("quantise") == "half-up");
    CHECK(json.at("board").at("build_id") == "3fa2b19c");
    CHECK(json.at("board").at("tick_hz") == 168000000);
    CHECK(json.at("firmware").at("verified") == false);
    CHECK(json.at("firmware").at("image_file").is_null());
    CHECK(json.at("verdict").at("latency_verified") == true);
    CHECK(json.at("verdict").at("counts") ==
          Json{{"pass", 1}, {"fail", 1}, {"invalid", 1}, {"undecided", 1}, {"not_run", 1}});
    CHECK(json.at("ended_by").is_null());
    CHECK(json.at("warnings") == Json{"one", "two"});
    CHECK(json.at("cases_planned").size() == 5);
    CHECK(json.at("cases").size() == 4);
}

TEST_CASE("run.json: a case carries verdict, grade, figures, neighbours, capture and rerun", "[record]") {
    const Json json = parsed(sample::run());
    const Json& captured = json.at("cases").at(1);
    const Json& failed = json.at("verdict").at("cases").at(1);
    CHECK(failed.at("number") == 2);
    CHECK(captured.at("number") == 2);
    CHECK(captured.at("name") == failed.at("name"));
    CHECK(failed.at("verdict") == "fail");
    CHECK(failed.at("grade") == "proven");
    CHECK(failed.at("invalid").is_null());
    CHECK(captured.at("capture").at("file") == "captures/002-mains-hum-half-scale.npy");
    CHECK(captured.at("stream").at("to_board_bytes") == 4400);
    CHECK(captured.at("stream").at("line_use_ratio") == 0.97);
    const Json& rule = failed.at("rules").at(0);
    CHECK(rule.at("kind") == "error");
    CHECK(rule.at("implicit") == false);
    CHECK(rule.at("reference") == "declared");
    CHECK(rule.at("position") == Json{{"file", "cw7.toml"}, {"line", 20}, {"column", 3}});
    CHECK(rule.at("verdict") == "fail");
    CHECK(rule.at("reason") == "3 of 2048 samples beyond max");
    CHECK(rule.at("figures").at(0) == Json{{"name", "max"},
                                           {"value", 1.5},
                                           {"uncertainty", nullptr},
                                           {"limit", 0.5},
                                           {"margin", -1.0},
                                           {"unit", "LSB"},
                                           {"at_least", false},
                                           {"verdict", "fail"},
                                           {"note", nullptr}});
    CHECK(rule.at("evidence").is_null());
    CHECK(rule.at("first_bad").at("index_samples") == 1041);
    CHECK(rule.at("first_bad").at("first_index_samples") == 1039);
    CHECK(rule.at("first_bad").at("response_codes") == Json{16370, 16371, 16370, 16371, 16372});
    CHECK(rule.at("first_bad").at("reference_lsb").at(2) == 16371.5);
    CHECK(failed.at("rules").at(1).at("implicit") == true);

    const Json& invalid = json.at("verdict").at("cases").at(2);
    CHECK(json.at("cases").at(2).at("capture").is_null());
    CHECK(invalid.at("rules") == Json::array());
    CHECK(invalid.at("invalid").at("kind") == "bench");
    CHECK(invalid.at("invalid").at("place") == "/dev/ttyUSB0");
}

TEST_CASE("run.json: what was not measured is null, NaN and infinity too", "[record]") {
    RunResult run = sample::run();
    run.elapsed_s = std::nan("");
    run.signal.output = sample::f32();
    run.cases[0].stream.line_use_ratio.reset();
    run.cases[0].rules[0].figures[0] = {"snr", std::nullopt, 60.0,          std::nullopt,
                                        "dB",  true,         Verdict::pass, "identical"};
    JudgedFigure& figure = run.cases[1].rules[0].figures[0];
    figure.value = std::numeric_limits<double>::infinity();
    figure.margin = -std::numeric_limits<double>::infinity();
    run.cases[1].rules[0].evidence = Evidence{65536, 1000000, std::numeric_limits<double>::infinity()};
    run.cases[1].rules[0].first_bad->reference = {std::nan("")};
    const std::string text = run_json(run, true);
    CHECK(text.find("nan") == std::string::npos);
    CHECK(text.find("inf\"") == std::string::npos);
    CHECK(text.find("Infinity") == std::string::npos);
    const Json json = Json::parse(text);
    CHECK(json.at("elapsed_s").is_null());
    CHECK(json.at("cases").at(0).at("stream").at("line_use_ratio").is_null());
    const Json& snr = json.at("verdict").at("cases").at(0).at("rules").at(0).at("figures").at(0);
    CHECK(snr.at("value").is_null());
    CHECK(snr.at("identical") == true);
    const Json& judged = json.at("verdict").at("cases").at(1).at("rules").at(0).at("figures").at(0);
    CHECK(judged.at("value").is_null());
    CHECK(judged.at("margin").is_null());
    CHECK_FALSE(judged.contains("identical"));
    CHECK(json.at("verdict").at("cases").at(1).at("rules").at(0).at("evidence") ==
          Json{{"samples", 65536}, {"budget_samples", 1000000}, {"fixed_length_samples", nullptr}});
    CHECK(json.at("verdict").at("cases").at(1).at("rules").at(0).at("first_bad").at("reference_value") ==
          Json::array({nullptr}));
}

TEST_CASE("run.json: what ended the run is an error with its kind", "[record]") {
    RunResult run = sample::run();
    const std::pair<ErrorKind, const char*> kinds[] = {{ErrorKind::usage, "usage"},
                                                       {ErrorKind::input, "input"},
                                                       {ErrorKind::bench, "bench"},
                                                       {ErrorKind::output, "output"},
                                                       {ErrorKind::interrupted, "interrupted"},
                                                       {ErrorKind::defect, "defect"}};
    for (const auto& [kind, name] : kinds) {
        run.ended_by = Error{kind, "", "it stopped", "start again"};
        CHECK(parsed(run).at("ended_by") ==
              Json{{"kind", name}, {"place", nullptr}, {"problem", "it stopped"}, {"remedy", "start again"}});
    }
}

TEST_CASE("run.json: hostile text comes back, bytes that are no UTF-8 as U+FFFD", "[record]") {
    RunResult run = sample::run();
    run.title = "\"\\\n\x01\x1b</script>\xff";
    const std::string text = run_json(run, true);
    CHECK(text.find('\x1b') == std::string::npos);
    CHECK(Json::parse(text).at("verdict").at("title") == "\"\\\n\x01\x1b</script>\xEF\xBF\xBD");
}

TEST_CASE("json text: a number is the shortest that reads back as the same double", "[record]") {
    CHECK(json_text(Json(0.544099104)) == "0.544099104\n");
    CHECK(json_text(Json(0.17357794)) == "0.17357794\n");
    CHECK(json_text(Json(-0.0)) == "-0\n");
    CHECK(json_text(Json(1e300)) == "1e+300\n");
    CHECK(json_text(Json(1.5)) == "1.5\n");
    CHECK(json_text(Json(std::nan(""))) == "null\n");

    const std::uint64_t seed = 20261201;
    INFO("seed " << seed);
    std::mt19937_64 bits(seed);
    for (int i = 0; i < 20000; ++i) {
        // Nine digits, as every judged figure has: the text must be those, never 17 of them.
        const std::string digits = "0.1" + std::to_string(10000000 + bits() % 90000000);
        const double value = std::stod(digits);
        std::string text = json_text(Json(value));
        text.pop_back();
        REQUIRE(Json::parse(text).get<double>() == value);
        REQUIRE(text.size() <= digits.size());
    }
}

TEST_CASE("json text: plain arrays stand on one line, others are indented", "[record]") {
    CHECK(json_text(Json{{"a", {1, 2.5, nullptr}}, {"b", Json::array({Json::object()})}, {"c", Json::array()}}) ==
          "{\n  \"a\": [1, 2.5, null],\n  \"b\": [\n    {}\n  ],\n  \"c\": []\n}\n");
}

TEST_CASE("run.json: written while the run grows it is the same as written at once", "[record]") {
    const RunResult whole = sample::run();
    REQUIRE(whole.cases.size() >= 2);
    RunResult run = whole;
    run.cases.clear();
    GrowingRunJson growing;
    CHECK(growing.document(run, false) == run_json(run, false));
    for (const CaseResult& result : whole.cases) {
        run.cases.push_back(result);
        CHECK(growing.document(run, false) == run_json(run, false));
        const Json json = Json::parse(growing.document(run, true));
        CHECK(json.at("cases").size() == run.cases.size());
        CHECK(json.at("verdict").at("cases").size() == run.cases.size());
    }
    CHECK(growing.document(whole, true) == run_json(whole, true));
}

TEST_CASE("run.json: the verdict section stands in it byte for byte, and holds no time, wire or folder", "[record]") {
    RunResult run = sample::run();
    const std::string verdict = verdict_text(run);
    CHECK(run_json(run, true).find("\n  \"verdict\": " + verdict + ",\n  \"cases\": [") != std::string::npos);
    RunResult elsewhere = run;
    elsewhere.started_utc = "2027-01-01T00:00:00Z";
    elsewhere.elapsed_s = 99.0;
    elsewhere.folder = "/somewhere/else";
    elsewhere.board.link = "another port";
    elsewhere.rig_file = "another.toml";
    elsewhere.root = "/root";
    for (CaseResult& result : elsewhere.cases) {
        result.stream.resends += 7;
        result.elapsed_s += 1.0;
        result.started_utc.clear();
        result.rerun.clear();
        result.capture_file = "captures/moved.npy";
    }
    CHECK(verdict_text(elsewhere) == verdict);
    elsewhere.cases[1].rules[0].figures[0].value = 1.5000001;
    CHECK(verdict_text(elsewhere) != verdict);
    run.cases.clear();
    CHECK(Json::parse(verdict_text(run)).at("cases") == Json::array());
}

TEST_CASE("run.json: what was sent, start state, settings and attempts stand with the capture", "[record]") {
    RunResult run = sample::run();
    CaseResult& result = run.cases[0];
    auto file = std::make_shared<SignalFile>();
    file->path = "data/belt.npy";
    ParameterValues inner;
    inner.set("file", ParameterValue(std::shared_ptr<const SignalFile>(file)));
    ParameterValues outer;
    outer.set("parts", ParameterValue(std::make_shared<const std::vector<StimulusWords>>(
                           std::vector<StimulusWords>{{"file", inner}})));
    outer.set("level_ratio", 0.5);
    outer.set("taps", std::vector<double>{1.0, 0.25});
    result.stimulus = {"sequence", outer, 2048, std::string(64, 'd'), "stimuli/001-tare-step.npy"};
    result.start = Start::flush;
    result.start_samples = 1234;
    result.rate_hz = 600.0;
    result.settings = {{"average-points", 8, {}}};
    AttemptResult attempt;
    attempt.invalid = {ErrorKind::bench, "/dev/ttyUSB0", "the board was silent", ""};
    result.attempts = {attempt};
    run.cases[1].rules[0].channel = 2;
    run.plan_parts = {{"", "the plan"}, {"data/belt.npy", "bytes"}};
    const Json json = parsed(run);
    const Json& captured = json.at("cases").at(0);
    CHECK(captured.at("stimulus") == Json{{"shape", "sequence"},
                                          {"recipe",
                                           {{"level_ratio", 0.5},
                                            {"parts", {{{"shape", "file"}, {"recipe", {{"file", "data/belt.npy"}}}}}},
                                            {"taps", {1, 0.25}}}},
                                          {"samples", 2048},
                                          {"sha256", std::string(64, 'd')},
                                          {"file", "stimuli/001-tare-step.npy"}});
    CHECK(captured.at("start") == "flush");
    CHECK(captured.at("start_samples") == 1234);
    CHECK(captured.at("rate_hz") == 600);
    CHECK(captured.at("settings") == Json{{"average-points", 8}});
    CHECK(captured.at("attempts").at(0).at("invalid").at("problem") == "the board was silent");
    const Json& rules = json.at("verdict").at("cases").at(1).at("rules");
    CHECK(rules.at(0).at("channel") == 2);
    CHECK(rules.at(1).at("channel").is_null());
    // SHA-256 of "bytes", by sha256sum.
    CHECK(json.at("plan").at("files") ==
          Json::array({{{"path", "data/belt.npy"},
                        {"sha256", "277089d91c0bdf4f2e6862ba7e4a07605119431f5d13f726dd352b06f1b206a9"}}}));
}
