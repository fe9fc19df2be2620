#include "runner/record/recorded_run.hpp"

#include <catch2/catch.hpp>
#include <nlohmann/json.hpp>
#include <random>

#include "runner/record/run_json.hpp"
#include "runner/world/sha256.hpp"
#include "tests/runner/report/sample_run.hpp"
#include "tests/support/fake_files.hpp"

using namespace halflsb;

namespace {

/// The sample run as a folder, with hashes that hold.
struct Folder {
    Folder() {
        run = sample::run();
        run.plan_text = "the plan";
        run.rig_text = "the rig";
        run.plan_sha256 = sha256_of_text(run.plan_text);
        run.rig_sha256 = sha256_of_text(run.rig_text);
        run.plan_parts = {{"", run.plan_text}, {"data/taps.txt", "0.5\n"}};
        for (CaseResult& result : run.cases) {
            result.stimulus = {"noise", {}, 2048, std::string(64, 'd'), ""};
            if (!result.capture_file.empty()) result.capture_sha256 = sha256_of_text(result.name);
        }
        write();
    }
    void write() {
        files.folders = {"run"};
        files.contents = {{"run/run.json", run_json(run, true)},
                          {"run/plan.toml", run.plan_text},
                          {"run/rig.toml", run.rig_text},
                          {"run/plan-files/data/taps.txt", "0.5\n"}};
        for (const CaseResult& result : run.cases) {
            if (!result.capture_file.empty()) files.contents["run/" + result.capture_file] = result.name;
        }
    }
    std::string refusal() const {
        const auto read = read_recorded_run(files, "run");
        REQUIRE_FALSE(read);
        CHECK(read.error().kind == ErrorKind::input);
        return to_text(read.error());
    }
    RunResult run;
    FakeFiles files;
};

void replace(std::string& text, const std::string& old, const std::string& by) {
    const std::size_t at = text.find(old);
    REQUIRE(at != std::string::npos);
    text.replace(at, old.size(), by);
}

}  // namespace

TEST_CASE("recorded run: what was written is read back", "[record]") {
    Folder folder;
    CaseResult& second = folder.run.cases[1];
    second.start = Start::flush;
    second.start_samples = 77;
    second.settings = {{"gain", -3, {}}};
    second.rate_hz = 600.5;
    folder.run.seed = 9;
    folder.write();
    const auto record = read_recorded_run(folder.files, "run/");
    REQUIRE(record);
    const RunResult& run = record->run;
    CHECK(record->folder == "run");
    CHECK(record->plan_path() == "run/plan.toml");
    CHECK(record->plan_root() == "run/plan-files");
    CHECK(record->signal.rate_hz == 1200.0);
    CHECK(record->signal.input == "q15");
    CHECK(record->plan_files.size() == 1);
    CHECK(record->plan_files.at(0).first == "data/taps.txt");
    CHECK(run.plan_file == "cw7.toml");
    CHECK(run.seed == 9u);
    CHECK(run.board.serial == "CW7-0042");
    CHECK(run.cases_planned == folder.run.cases_planned);
    REQUIRE(run.cases.size() == 4);
    CHECK(run.cases[1].start == Start::flush);
    CHECK(run.cases[1].start_samples == 77);
    CHECK(run.cases[1].settings.at(0).value == -3);
    CHECK(run.cases[1].rate_hz == 600.5);
    CHECK(run.cases[1].capture_file == "captures/002-mains-hum-half-scale.npy");
    CHECK(run.cases[2].verdict == CaseVerdict::invalid);
    CHECK(to_text(*run.cases[2].invalid) == to_text(*folder.run.cases[2].invalid));
    CHECK(run.cases[2].stream.resends == 3);
    CHECK(check_recorded_files(*record, folder.files));
}

TEST_CASE("recorded run: with the recorded verdicts the document comes out as it was, byte for byte", "[record]") {
    Folder folder;
    folder.run.ended_by = Error{ErrorKind::interrupted, "", "it was interrupted", ""};
    folder.run.warnings = {"one"};
    folder.write();
    const auto record = read_recorded_run(folder.files, "run");
    REQUIRE(record);
    const auto again = judged_run_json(*record, folder.run, false);
    REQUIRE(again);
    CHECK(*again == folder.files.contents["run/run.json"]);
    RunResult other = folder.run;
    other.plan_file = "other.toml";
    other.cases.resize(2);
    const auto changed = judged_run_json(*record, other, true);
    REQUIRE(changed);
    const auto json = nlohmann::json::parse(*changed);
    CHECK(json.at("plan").at("file") == "other.toml");
    CHECK(json.at("cases").size() == 2);
    CHECK(json.at("verdict").at("cases").size() == 2);
}

TEST_CASE("recorded run: each file that is missing or edited is refused by name", "[record]") {
    Folder folder;
    const auto record = read_recorded_run(folder.files, "run");
    REQUIRE(record);
    const auto whole = folder.files.contents;
    for (const auto& [path, bytes] : whole) {
        if (path == "run/run.json") continue;
        INFO(path);
        folder.files.contents[path] += "x";
        auto checked = check_recorded_files(*record, folder.files);
        REQUIRE_FALSE(checked);
        CHECK(to_text(checked.error()) == path +
                                              ": it was edited: its SHA-256 is not the recorded one\n"
                                              "  put the file of the run back, or capture anew with halflsb check");
        folder.files.contents.erase(path);
        checked = check_recorded_files(*record, folder.files);
        REQUIRE_FALSE(checked);
        CHECK(to_text(checked.error()) == path +
                                              ": it is missing: the record names it\n"
                                              "  put it back, or capture anew with halflsb check");
        folder.files.contents = whole;
    }
}

TEST_CASE("recorded run: another version is refused and says who wrote it", "[record]") {
    Folder folder;
    std::string& text = folder.files.contents["run/run.json"];
    const std::string before = text;
    replace(text, "\"format_version\": 2", "\"format_version\": 3");
    replace(text, "\"tool_version\": \"0.1.0\"", "\"tool_version\": \"2.0.0\"");
    CHECK(folder.refusal() ==
          "run/run.json: it is of format version 3, written by halflsb 2.0.0; this halflsb reads version 2\n"
          "  judge it with that version or a newer one");
    text = before;
    replace(text, "\"finished\": true", "\"finished\": false");
    CHECK(folder.refusal() ==
          "run/run.json: the run is incomplete: it was never finished, so its program died or is still at work\n"
          "  wait for it, or capture anew with halflsb check");
}

TEST_CASE("recorded run: a verdict that contradicts its capture is refused", "[record]") {
    Folder folder;
    std::string& text = folder.files.contents["run/run.json"];
    replace(text, "\"grade\": \"broken\"", "\"grade\": \"proven\"");
    CHECK(folder.refusal() ==
          "run/run.json: verdict.cases[2] contradicts itself: verdict, grade and invalid do not belong together\n"
          "  it was edited or damaged; capture anew with halflsb check");
    folder.write();
    replace(text, "\"sha256\": \"" + std::string(64, 'd') + "\"", "\"sha256\": \"" + std::string(63, 'd') + "\"");
    CHECK(folder.refusal().find("cases[0].stimulus.sha256 is \"" + std::string(58, 'd')) != std::string::npos);
}

TEST_CASE("recorded run: no damaged document crashes the reader or is taken for a whole one in silence", "[record]") {
    Folder folder;
    std::string& text = folder.files.contents["run/run.json"];
    const std::string whole = text;
    const std::uint64_t seed = 20261201;
    INFO("seed " << seed);
    std::mt19937_64 random(seed);
    const std::string signs = "{}[],:\"0129-+eE.truefalsnl\\u\xff ";
    for (int round = 0; round < 3000; ++round) {
        text = whole;
        for (std::uint64_t n = 1 + random() % 3; n > 0; --n) {
            const std::size_t at = random() % text.size();
            switch (random() % 3) {
                case 0:
                    text[at] = signs[random() % signs.size()];
                    break;
                case 1:
                    text.erase(at, 1 + random() % 40);
                    break;
                default:
                    text.insert(at, 1, signs[random() % signs.size()]);
            }
        }
        const auto read = read_recorded_run(folder.files, "run");
        // What is still read can be put together again.
        if (read) CHECK(judged_run_json(*read, read->run, false));
    }
}
