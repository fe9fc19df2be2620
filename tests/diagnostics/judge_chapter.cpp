// Runs judged again and accepted: what halflsb judge, accept and check --list have to say.
#include <filesystem>
#include <string>
#include <vector>

#include "runner/record/run_document.hpp"
#include "tests/diagnostics/workshop.hpp"

namespace halflsb::diagnostics {

namespace {

namespace fs = std::filesystem;

const std::string plan = R"(title = "CW-7 load cell"
[signal]
rate_hz = 1200.0
input = "q15"
output = "q15"
filter = "average"
[[filter]]
kind = "moving-average"
points = 16
[[rule]]
kind = "error"
max_lsb = 0.5
[[case]]
name = "belt noise"
[case.stimulus]
shape = "noise"
length_samples = 1000
[[case]]
name = "tare step"
start = "flush"
labels = ["quick"]
settings = { average-points = 16 }
[case.stimulus]
shape = "step"
length_samples = 200
)";

const std::string unchanged = "[[rule]]\nkind = \"unchanged\"\n";

struct Change {
    std::string_view done, from, to;
};

void show_other_plans(Page& page, const Workshop& workshop) {
    const std::vector<Change> changes = {
        {"another input", "input = \"q15\"\noutput = \"q15\"", "input = \"q31\"\noutput = \"q15\""},
        {"another output", "output = \"q15\"", "output = \"q31\""},
        {"another count of channels", "output = \"q15\"", "output = \"q15\"\nchannels = 2"},
        {"another filter", "filter = \"average\"", "filter = \"notch\""},
        {"another rate", "rate_hz = 1200.0", "rate_hz = 600.0"},
        {"another start", "start = \"flush\"\n", ""},
        {"a filter with a longer memory", "points = 16\n", "points = 32\n"},
        {"another setting", "average-points = 16", "average-points = 8"},
        {"no setting", "settings = { average-points = 16 }\n", ""},
        {"a longer stimulus", "length_samples = 1000", "length_samples = 1001"},
        {"another seed", "length_samples = 1000", "length_samples = 1000\nseed = 2"},
        {"a plan that is wrong", "max_lsb = 0.5", "max_lbs = 0.5"},
    };
    for (const Change& change : changes) {
        workshop.write("other.toml", spoilt(plan, change.from, change.to));
        page.show(change.done, workshop.said_by({"judge", "run", "other.toml"}));
    }
    page.show("a root without a plan", workshop.said_by({"judge", "run", "--root", "."}));
}

/// What judge goes on with, and says.
void show_what_is_missing(Page& page, const Workshop& workshop) {
    workshop.write("other.toml", spoilt(spoilt(plan, "\"belt noise\"", "\"belt hum\""), "\"tare step\"", "\"zero\""));
    const std::string said = workshop.said_by({"judge", "run", "other.toml"}, true);
    const std::size_t from = said.find("warning: ");
    page.show("cases of other names", from == std::string::npos ? "" : said.substr(from, said.find("0 pass") - from));
}

void show_edited_records(Page& page, const Workshop& workshop) {
    const auto edited = [&](std::string_view done, const std::string& file, std::string_view from,
                            std::string_view to) {
        fs::copy("run", "edited", fs::copy_options::recursive);
        std::string text = workshop.read("edited/" + file);
        const std::size_t at = text.find(from);
        if (at == std::string::npos) {
            page.missing(done);
        } else {
            text.replace(at, from.size(), to);
            // Sealed anew, so that what the edit broke is told and not the edit.
            workshop.write("edited/" + file, file == "run.json" ? sealed(text) : text);
            page.show(done, workshop.said_by({"judge", "edited"}));
        }
        fs::remove_all("edited");
    };
    edited("a rate in the record that the plan does not have", "run.json", "\"rate_hz\": null", "\"rate_hz\": 600");
    edited("a case in the record that the plan does not have", "run.json", "\"cases_planned\": [\"belt noise\"",
           "\"cases_planned\": [\"belt hum\"");
    fs::copy("run", "edited", fs::copy_options::recursive);
    fs::remove("edited/captures/001-belt-noise.npy");
    fs::create_symlink("../../run/captures/001-belt-noise.npy", "edited/captures/001-belt-noise.npy");
    page.show("a capture that leads out of the folder",
              replaced(workshop.said_by({"judge", "edited"}), {{fs::canonical(".").string(), "/work"}}));
    fs::remove_all("edited");
}

void show_accept(Page& page, const Workshop& workshop) {
    page.show("a plan without a rule that asks for it", workshop.said_by({"accept", "run"}));
    workshop.write("held.toml", plan + unchanged);
    const auto average_of_15 = [](test::ModelBoard& board) { board.settings[0].value = 15; };
    workshop.record("held.toml", "bad", average_of_15);
    page.show("a run that fails", workshop.said_by({"accept", "bad"}));
    workshop.record("held.toml", "silent", [](test::ModelBoard& board) {
        board.instead = [](std::uint8_t type, const test::Bytes&, test::Bytes&) { return type == 0x10; };
    });
    page.show("a run whose capture is invalid", workshop.said_by({"accept", "silent"}));
    workshop.record("held.toml", "good");
    page.show("a root that is not there", workshop.said_by({"accept", "good", "--root", "nowhere"}));
    const auto with_baseline = [&](std::string_view done, const std::string& baseline, const std::string& more = "") {
        workshop.write("held.toml", plan + unchanged + "baseline = \"" + baseline + "\"\n" + more);
        fs::remove_all("run2");
        workshop.record("held.toml", "run2");
        page.show(done, replaced(workshop.said_by({"accept", "run2"}, true), {{fs::canonical(".").string(), "/work"}}));
    };
    fs::create_directory_symlink("/tmp", "link");
    with_baseline("a baseline behind a link", "link/cw7");
    workshop.write("held.toml", plan + unchanged + "max_lsb = 1\n");
    workshop.record("held.toml", "within");
    page.show("a largest difference, and too few samples kept",
              workshop.said_by({"accept", "within", "--samples", "99"}));
    page.show("accepted for the first time", workshop.said_by({"accept", "good"}, true));
    page.show("accepted again", workshop.said_by({"accept", "good"}, true));
    fs::copy("good", "edited", fs::copy_options::recursive);
    fs::copy("baseline", "edited/plan-files/baseline", fs::copy_options::recursive);
    page.show("a baseline that was put into the run afterwards", workshop.said_by({"judge", "edited"}));
    fs::remove_all("edited/plan-files/baseline");
    std::string document = workshop.read("edited/run.json");
    document = spoilt(document, "\"ended_by\": null",
                      "\"ended_by\": { \"kind\": \"bench\", \"place\": null, \"problem\": \"the port is gone\", "
                      "\"remedy\": null }");
    workshop.write("edited/run.json", sealed(document));
    page.show("a run that was ended after its last case", workshop.said_by({"accept", "edited"}));

    fs::remove_all("edited");
}

const std::string loose = R"(title = "CW-7 load cell"
[signal]
rate_hz = 1200.0
input = "q15"
output = "q15"
[[filter]]
kind = "moving-average"
points = 16
[[rule]]
kind = "error"
max_ratio = 1.0
[[rule]]
kind = "unchanged"
baseline = "loose"
[[case]]
name = "tare step"
[case.stimulus]
shape = "step"
at_samples = 100
length_samples = 600
)";

/// What accept says of a response that is another one, and what it does not accept for its form.
void show_changed(Page& page, const Workshop& workshop) {
    const auto average_of_15 = [](test::ModelBoard& board) { board.settings[0].value = 15; };
    const auto words_of_32_bits = [](test::ModelBoard& board) { board.filters[0].output = 2; };
    workshop.write("loose.toml", loose);
    workshop.record("loose.toml", "old");
    workshop.record("loose.toml", "new", average_of_15);
    workshop.write("loose.toml", spoilt(loose, "at_samples = 100", "at_samples = 101"));
    workshop.record("loose.toml", "later");
    const std::string wide = spoilt(loose, "output = \"q15\"", "output = \"q31\"");
    workshop.write("loose.toml", wide);
    workshop.record("loose.toml", "wide", words_of_32_bits);
    workshop.write("loose.toml", spoilt(wide, "tare step", "zero step"));
    workshop.record("loose.toml", "another", words_of_32_bits);
    workshop.write("loose.toml", loose);
    workshop.write("loose.toml", spoilt(loose, "[case.stimulus]", "settings = { gain = 3 }\n[case.stimulus]"));
    workshop.record("loose.toml", "none");
    const auto accept = [&](std::string_view done, const std::string& run, const std::string& samples) {
        page.show(done, workshop.said_by({"accept", run, "--samples", samples}, true));
    };
    accept("a run without a case", "none", "600");
    accept("accepted with all samples", "old", "600");
    accept("another response", "new", "50");
    accept("another response beyond the samples that were kept", "old", "600");
    fs::remove("loose/001-tare-step.npy");
    accept("another response, and the kept samples are gone", "new", "600");
    accept("another stimulus", "later", "600");
    accept("another format, and a case that is not in the run", "another", "600");
    accept("another format", "wide", "600");
}

}  // namespace

void judge_chapter(Page& page) {
    page.chapter("A run, judged again");
    Workshop workshop;
    workshop.write("plan.toml", plan);
    workshop.record("plan.toml", "run");
    show_other_plans(page, workshop);
    show_what_is_missing(page, workshop);
    show_edited_records(page, workshop);
    page.chapter("A run, accepted");
    show_accept(page, workshop);
    show_changed(page, workshop);
    workshop.write("settings.toml", spoilt(plan, "average-points = 16", "average-points = 8"));
    const RunResult kept = workshop.record("settings.toml", "kept", [](test::ModelBoard& board) {
        board.instead = [&board](std::uint8_t, const test::Bytes&, test::Bytes&) {
            return !board.settings_made.empty();
        };
    });
    page.show("a board that falls silent when its setting was changed",
              kept.warnings.empty() ? std::string() : kept.warnings.front());
    page.chapter("Before a run");
    workshop.write("bench.toml",
                   "[board]\nname = \"bench 3\"\nisolated = true\n[link]\nuse = \"serial\"\n"
                   "port = \"./tty\"\n[wire]\nform = \"framed\"\n[commands]\n"
                   "before_run = [[\"./flash.sh\", \"{image}\"]]\n");
    page.show("a list with the times of two rigs",
              workshop.said_by({"check", "plan.toml", "--list", "--rig", "bench.toml", "--rig", "bench.toml"}));
    page.show("a rig that flashes, and no image", workshop.said_by({"check", "plan.toml", "--rig", "bench.toml"}));
    page.show("time for some cases, and no rig", workshop.said_by({"check", "plan.toml", "--list", "--for", "60s"}));
    page.show("time for no case",
              workshop.said_by({"check", "plan.toml", "--list", "--rig", "bench.toml", "--for", "0.001s"}));
    page.show("a label that no case has", workshop.said_by({"check", "plan.toml", "--list", "--label", "slow"}));
    page.show("a label that the named case does not have",
              workshop.said_by({"check", "plan.toml", "--list", "--case", "belt noise", "--label", "quick"}));
}

}  // namespace halflsb::diagnostics
