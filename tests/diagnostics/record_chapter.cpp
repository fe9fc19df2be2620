// A run's folder that is read back: incomplete, edited, of another version, or none of ours.
#include <nlohmann/json.hpp>
#include <string>
#include <vector>

#include "runner/record/capture_file.hpp"
#include "runner/record/recorded_run.hpp"
#include "runner/record/run_document.hpp"
#include "runner/record/run_json.hpp"
#include "runner/record/strict_json.hpp"
#include "runner/world/sha256.hpp"
#include "stimuli/npy.hpp"
#include "tests/diagnostics/plan_page.hpp"
#include "tests/runner/report/sample_run.hpp"

namespace halflsb::diagnostics {

namespace {

const std::string place = "run/run.json";

/// The sample run as a folder, with hashes that hold.
FakeFiles sample_folder() {
    RunResult run = sample::run();
    run.plan_sha256 = sha256_of_text(run.plan_text);
    run.rig_sha256 = sha256_of_text(run.rig_text);
    run.plan_parts = {{"", run.plan_text}};
    for (CaseResult& result : run.cases) {
        result.stimulus = {"noise", {}, 2048, std::string(64, 'd'), ""};
        if (!result.capture_file.empty()) result.capture_sha256 = sha256_of_text(result.name);
    }
    FakeFiles files;
    files.folders = {"run"};
    files.contents = {{place, run_json(run, true)}, {"run/plan.toml", run.plan_text}, {"run/rig.toml", run.rig_text}};
    for (const CaseResult& result : run.cases) {
        if (!result.capture_file.empty()) files.contents["run/" + result.capture_file] = result.name;
    }
    return files;
}

/// Only the first of several places.
std::string first_spoilt(std::string text, std::string_view from, std::string_view to) {
    const std::size_t at = text.find(from);
    return at == std::string::npos ? spoilt(text, from, to) : text.replace(at, from.size(), to);
}

const std::vector<Change>& changes() {
    static const std::string good_hash = "\"sha256\": \"" + std::string(64, 'd') + "\"";
    static const std::vector<Change> all = {
        {"another format", "\"format\": \"halflsb run\"", "\"format\": \"shopping list\""},
        {"no format", "\"format\": \"halflsb run\",", ""},
        {"a newer version", "\"format_version\": 2", "\"format_version\": 3"},
        {"an older version", "\"format_version\": 2", "\"format_version\": 1"},
        {"a version of nobody", "\"format_version\": 2,\n  \"tool_version\": \"0.1.0\"", "\"format_version\": 3"},
        {"a run that never ended", "\"finished\": true", "\"finished\": false"},
        {"finished that is a word", "\"finished\": true", "\"finished\": \"yes\""},
        {"not JSON", "\"finished\"", "finished"},
        {"a key twice", "\"finished\": true", "\"finished\": true, \"finished\": true"},
        {"a number that is too large", "\"elapsed_s\": 1.5", "\"elapsed_s\": 1e999"},
        {"a text for a number", "\"elapsed_s\": 1.5", "\"elapsed_s\": \"long\""},
        {"a number for a text", "\"title\": \"CW-7", "\"title\": 7, \"was\": \"CW-7"},
        {"a seed below 0", "\"seed\": null", "\"seed\": -1"},
        {"a count below 0", "\"block_samples\": 256", "\"block_samples\": -256"},
        {"a list for an object", "\"board\": {", "\"board\": [], \"was\": {"},
        {"an object for a list", "\"warnings\": []", "\"warnings\": {}"},
        {"a hash that is cut", good_hash, "\"sha256\": \"dddd\""},
        {"a start that is none", "\"start\": \"reset\"", "\"start\": \"rest\""},
        {"a verdict that contradicts its grade", "\"grade\": \"broken\"", "\"grade\": \"proven\""},
        {"a kind of error that is none", "\"kind\": \"bench\"", "\"kind\": \"bank\""},
    };
    return all;
}

void show_documents(Page& page) {
    const FakeFiles good = sample_folder();
    FakeFiles files;
    page.show("no such folder", read_recorded_run(files, "run"));
    files.folders = {"run"};
    page.show("a folder without a record", read_recorded_run(files, "run"));
    for (const Change& change : changes()) {
        files = good;
        files.contents[place] = first_spoilt(good.contents.at(place), change.from, change.to);
        page.show(change.done, read_recorded_run(files, "run"));
    }
    const auto edited = [&](std::string_view done, void (*edit)(nlohmann::ordered_json&)) {
        files = good;
        auto json = nlohmann::ordered_json::parse(good.contents.at(place));
        edit(json);
        // Sealed anew, so that what the edit broke is told and not the edit.
        files.contents[place] = sealed(json.dump());
        page.show(done, read_recorded_run(files, "run"));
    };
    using Document = nlohmann::ordered_json;
    edited("a capture without a hash", [](Document& d) { d["cases"][0]["capture"]["sha256"] = nullptr; });
    edited("a capture in another folder", [](Document& d) { d["cases"][0]["capture"]["file"] = "../001.npy"; });
    edited("no capture of a case that was judged", [](Document& d) { d["cases"][0]["capture"] = nullptr; });
    edited("no hash of what was sent", [](Document& d) { d["cases"][0]["stimulus"]["sha256"] = nullptr; });
    edited("a verdict of another case", [](Document& d) { d["verdict"]["cases"][0]["name"] = "tare"; });
    edited("no verdict of the last case", [](Document& d) { d["verdict"]["cases"].erase(3); });
    edited("a case twice", [](Document& d) {
        d["cases"][1]["name"] = d["cases"][0]["name"];
        d["verdict"]["cases"][1]["name"] = d["cases"][0]["name"];
    });
    files = good;
    std::string& document = files.contents[place];
    document.replace(document.find("\"verdict\": \"fail\""), 17, "\"verdict\": \"pass\"");
    page.show("a verdict edited by hand", read_recorded_run(files, "run"));
    edited("no case planned", [](Document& d) { d["cases_planned"] = nlohmann::ordered_json::array(); });
    edited("more cases than were planned", [](Document& d) { d["cases_planned"] = {"tare step"}; });
    std::string deep;
    for (int i = 0; i < 200; ++i) deep += '[';
    page.show("values nested too deep", parse_json_strictly(deep, place));
}

void show_files(Page& page) {
    const FakeFiles good = sample_folder();
    const auto record = read_recorded_run(good, "run");
    if (!record) return page.show("a good record", record.error());
    FakeFiles files = good;
    files.contents["run/plan.toml"] += "\n";
    page.show("a plan that was edited", check_recorded_files(*record, files));
    files = good;
    files.contents.erase("run/captures/004-dc.npy");
    page.show("a capture that is missing", check_recorded_files(*record, files));
    page.show("a file that is not there", path_inside(good, "run", "captures/none.npy"));
    RunResult other = record->run;
    other.cases.front().name = "another";
    page.show("a case that was judged and not recorded: a defect of our own", judged_run_json(*record, other, false));
}

void show_captures(Page& page) {
    FakeFiles files;
    const SampleFormat q15 = *sample_format("q15");
    const auto show = [&](std::string_view done, const std::string& bytes) {
        files.contents["run/001.npy"] = bytes;
        page.show(done, CaptureFile::open(files, "run/001.npy", "run/001.npy", q15, 1));
    };
    const auto header = [](NpyType type, std::int64_t count, int channels) {
        const auto bytes = npy_header(type, count, channels);
        return std::string(reinterpret_cast<const char*>(bytes.data()), bytes.size());
    };
    show("a capture that is no NPY", "none");
    show("a capture of another type", header(NpyType::int32, 2, 1) + "12345678");
    show("a capture of two channels", header(NpyType::int16, 2, 2) + "12345678");
    show("a capture that is cut", header(NpyType::int16, 4, 1) + "123456");
    files.contents["run/001.npy"] = header(NpyType::int16, 1, 1) + "12";
    auto capture = CaptureFile::open(files, "run/001.npy", "run/001.npy", q15, 1);
    std::vector<Code> codes(2);
    if (capture) page.show("samples that are not there: a defect of our own", capture->read(0, codes));
}

}  // namespace

void record_chapter(Page& page) {
    page.chapter("The record of a run, read back");
    show_documents(page);
    show_files(page);
    show_captures(page);
}

}  // namespace halflsb::diagnostics
