#include "runner/record/run_folder.hpp"

#include <unistd.h>

#include <catch2/catch.hpp>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <nlohmann/json.hpp>

#include "tests/runner/report/sample_run.hpp"

using namespace halflsb;
namespace fs = std::filesystem;

namespace {

/// An empty folder, current while the test runs, gone afterwards.
class Scratch {
public:
    Scratch() : before_(fs::current_path()) {
        std::string name = (fs::temp_directory_path() / "halflsb-run-folder-XXXXXX").string();
        REQUIRE(::mkdtemp(name.data()) != nullptr);
        path_ = name;
        fs::current_path(path_);
    }
    ~Scratch() {
        fs::current_path(before_);
        fs::remove_all(path_);
    }
    Scratch(const Scratch&) = delete;
    Scratch& operator=(const Scratch&) = delete;

private:
    fs::path before_, path_;
};

/// A disk on which the nth writing of a file and all later ones fail: a full disk.
class FullDisk final : public Files {
public:
    explicit FullDisk(int good_writes) : good_writes_(good_writes) {}
    using Files::write;

    Outcome<std::string> read(const std::string& path, std::size_t cap) const override { return disk_.read(path, cap); }
    Outcome<std::string> read_under_root(const std::string& root, const std::string& path,
                                         std::size_t cap) const override {
        return disk_.read_under_root(root, path, cap);
    }
    Outcome<std::unique_ptr<InputFile>> open_input(const std::string& path) const override {
        return disk_.open_input(path);
    }
    bool exists(const std::string& path) const override { return disk_.exists(path); }
    std::string resolved(const std::string& path) const override { return disk_.resolved(path); }
    Outcome<void> write(const std::string& path, std::span<const std::byte> bytes) override {
        if (good_writes_-- <= 0) return full(path);
        return disk_.write(path, bytes);
    }
    Outcome<void> make_directories(const std::string& path) override { return disk_.make_directories(path); }
    Outcome<std::unique_ptr<OutputFile>> open_output(const std::string& path) override {
        if (good_writes_-- <= 0) return full(path);
        return disk_.open_output(path);
    }

private:
    static Error full(const std::string& path) {
        return {ErrorKind::output, path, "no space is left on its disk",
                "free some space, or choose another folder with --out"};
    }
    int good_writes_;
    DiskFiles disk_;
};

std::string content(const std::string& path) {
    std::ifstream file(path, std::ios::binary);
    return {std::istreambuf_iterator<char>(file), {}};
}

RunFolderWish wish(std::optional<std::string> out = std::nullopt) {
    return {"2026-12-01T09:30:00Z", "plans/cw7 acceptance.toml", std::move(out)};
}

std::string error_of(const Outcome<RunFolder>& outcome) {
    REQUIRE_FALSE(outcome);
    CHECK(outcome.error().kind == ErrorKind::output);
    return to_text(outcome.error());
}

}  // namespace

TEST_CASE("run folder: named by UTC time and plan, numbered where the name is taken", "[record]") {
    const Scratch scratch;
    DiskFiles files;
    const auto first = open_run_folder(files, wish());
    REQUIRE(first);
    CHECK(first->path() == ".halflsb/20261201T093000Z-cw7-acceptance");
    CHECK(fs::is_directory(first->path() + "/captures"));
    const auto second = open_run_folder(files, wish());
    REQUIRE(second);
    CHECK(second->path() == ".halflsb/20261201T093000Z-cw7-acceptance-2");
    // Whatever holds the name, a file for instance, is stepped over.
    std::ofstream(".halflsb/20261201T093000Z-cw7-acceptance-3") << "x";
    const auto fourth = open_run_folder(files, wish());
    REQUIRE(fourth);
    CHECK(fourth->path() == ".halflsb/20261201T093000Z-cw7-acceptance-4");
}

TEST_CASE("run folder: of several runs in one call, the default's name ends in the rig's", "[record]") {
    const Scratch scratch;
    DiskFiles files;
    RunFolderWish one = wish();
    one.note = "bench 3";
    CHECK(open_run_folder(files, one)->path() == ".halflsb/20261201T093000Z-cw7-acceptance-bench-3");
    CHECK(open_run_folder(files, one)->path() == ".halflsb/20261201T093000Z-cw7-acceptance-bench-3-2");
    REQUIRE(open_folder_of_runs(files, "all"));
    CHECK(open_run_folder(files, wish("all/bench-3")));
    const auto again = open_folder_of_runs(files, "all");
    REQUIRE_FALSE(again);
    CHECK(to_text(again.error()) ==
          "all: it is not empty, and a record must not mix two runs\n  give a new or an empty folder with --out");
}

TEST_CASE("run folder: the proof that it is writable leaves nothing behind", "[record]") {
    const Scratch scratch;
    DiskFiles files;
    REQUIRE(open_run_folder(files, wish("out")));
    CHECK(std::distance(fs::directory_iterator("out"), {}) == 1);
    CHECK(fs::is_empty("out/captures"));
}

TEST_CASE("run folder: --out takes a new or an empty folder and refuses any other", "[record]") {
    const Scratch scratch;
    DiskFiles files;
    const auto made = open_run_folder(files, wish("a/b/c/"));
    REQUIRE(made);
    CHECK(made->path() == "a/b/c");
    fs::create_directory("empty");
    CHECK(open_run_folder(files, wish("empty")));
    CHECK(error_of(open_run_folder(files, wish("a/b/c"))) ==
          "a/b/c: it is not empty, and a record must not mix two runs\n  give a new or an empty folder with --out");
    std::ofstream("file") << "x";
    CHECK(error_of(open_run_folder(files, wish("file"))) ==
          "file: it exists and is not a folder\n  give a new or an empty folder with --out");
    CHECK(error_of(open_run_folder(files, wish(""))) ==
          "--out: the folder has no name\n  give a new or an empty folder");
}

TEST_CASE("run folder: a file in the place of a folder above is refused with its path", "[record]") {
    const Scratch scratch;
    DiskFiles files;
    std::ofstream("file") << "x";
    // The words are those of the files seam; here it counts that they name the path and reach the user.
    CHECK(error_of(open_run_folder(files, wish("file/run"))).rfind("file", 0) == 0);
    std::ofstream(".halflsb") << "x";
    CHECK(error_of(open_run_folder(files, wish())).rfind(".halflsb", 0) == 0);
}

TEST_CASE("run folder: a full disk shows before the board is touched", "[record]") {
    const Scratch scratch;
    FullDisk files(0);
    CHECK(error_of(open_run_folder(files, wish("out"))) ==
          "out/probe: no space is left on its disk\n  free some space, or choose another folder with --out");
}

TEST_CASE("run folder: plan and rig are kept as they were, run.json and junit.xml replaced whole", "[record]") {
    const Scratch scratch;
    DiskFiles files;
    auto folder = open_run_folder(files, wish("out"));
    REQUIRE(folder);
    const std::string plan("title = \"\xff\0\"\r\n", 13);
    RunResult run = sample::run();
    run.plan_text = plan;
    run.plan_parts = {{"", plan}, {"common.toml", "x = 1\n"}, {"data/a/belt.npy", std::string("\0\1", 2)}};
    REQUIRE(folder->save_inputs(run));
    CHECK(content("out/plan-files/common.toml") == "x = 1\n");
    CHECK(content("out/plan-files/data/a/belt.npy") == std::string("\0\1", 2));
    CHECK(content("out/plan.toml") == plan);
    CHECK(content("out/rig.toml") == "[board]\n");

    REQUIRE(folder->save(run, false, "<testsuites/>"));
    CHECK(nlohmann::json::parse(content("out/run.json")).at("finished") == false);
    REQUIRE(folder->save(run, true, "<testsuites></testsuites>"));
    CHECK(nlohmann::json::parse(content("out/run.json")).at("finished") == true);
    CHECK(content("out/junit.xml") == "<testsuites></testsuites>");
    CHECK(std::distance(fs::directory_iterator("out"), {}) == 6);  // and captures/, plan-files/
}

TEST_CASE("run folder: whichever writing fails, the files written before stay whole", "[record]") {
    RunResult run = sample::run();
    run.plan_text = "plan";
    run.rig_text = "rig";
    // The probe, plan, rig, run.json, junit.xml, run.json, junit.xml; each in turn is the first to fail.
    for (int good = 1; good <= 7; ++good) {
        INFO(good << " good writes");
        const Scratch scratch;
        FullDisk files(good);
        auto folder = open_run_folder(files, wish("out"));
        REQUIRE(folder);
        bool all_good = true;
        const auto note = [&](const Outcome<void>& outcome) {
            if (!outcome) CHECK(outcome.error().kind == ErrorKind::output);
            all_good = all_good && static_cast<bool>(outcome);
        };
        note(folder->save_inputs(run));
        note(folder->save(run, false, "first"));
        note(folder->save(run, true, "second"));
        CHECK(all_good == (good == 7));
        if (good >= 2) CHECK(content("out/plan.toml") == "plan");
        if (good >= 4) CHECK(nlohmann::json::parse(content("out/run.json")).at("finished") == (good >= 6));
        if (good >= 5) CHECK(content("out/junit.xml") == (good == 7 ? "second" : "first"));
    }
}

TEST_CASE("file names: safe, short, never hidden, never empty", "[record]") {
    CHECK(file_name_part("mains hum, half scale") == "mains-hum-half-scale");
    CHECK(file_name_part("../../etc/passwd") == "etc-passwd");
    CHECK(file_name_part(".hidden") == "hidden");
    CHECK(file_name_part("a/b\\c:d\0e") == "a-b-c-d");
    CHECK(file_name_part("\xff\x1b") == "unnamed");
    CHECK(file_name_part("") == "unnamed");
    CHECK(file_name_part("--rm -rf") == "rm--rf");
    CHECK(file_name_part("v1.2_rc") == "v1.2_rc");
    CHECK(file_name_part(std::string(200, 'x')).size() == 60);
    CHECK(file_name_part(std::string(59, 'x') + "-y") == std::string(59, 'x'));
}

TEST_CASE("file names: captures are numbered by the case's place in the plan", "[record]") {
    CHECK(capture_file_name(3, "mains hum, half scale") == "captures/003-mains-hum-half-scale.npy");
    CHECK(capture_file_name(1234, "a") == "captures/1234-a.npy");
}
