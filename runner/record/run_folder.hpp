// The folder of a run: what docs/run-folder.md describes, written so that a crash loses nothing that
// was finished.
//
// It is proved writable before the board is touched. Every file is written beside its name and then
// renamed (runner/world/files.hpp).
#pragma once

#include <optional>
#include <string>
#include <string_view>

#include "runner/record/run_json.hpp"
#include "runner/world/files.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

/// Below the run's folder: the files that the plan was read from, under their paths below its root.
inline constexpr const char* plan_files_folder = "plan-files";

struct RunFolderWish {
    std::string started_utc;         ///< "2026-12-01T09:30:00Z"
    std::string plan_file;           ///< its name is part of the folder's
    std::optional<std::string> out;  ///< --out; none: .halflsb/<UTC time>-<plan>/ in the current folder
    std::string note = {};           ///< at the end of the default's name, where one call makes several runs
};

class RunFolder {
public:
    const std::string& path() const { return path_; }
    /// Of a file of the folder: path() + "/" + file.
    std::string path_of(std::string_view file) const;

    /// plan.toml and rig.toml as they were, and below plan-files/ every other file that the plan was read from.
    Outcome<void> save_inputs(const RunResult& run);
    /// run.json and junit.xml anew: after each case, and once more with `finished` at the end.
    Outcome<void> save(const RunResult& run, bool finished, const std::string& junit_xml);
    /// report.html, once at the end: its plots would have to be written anew after each case.
    Outcome<void> save_page(const std::string& report_html);

private:
    friend Outcome<RunFolder> open_run_folder(Files& files, const RunFolderWish& wish);
    RunFolder(Files& files, std::string path) : files_(&files), path_(std::move(path)) {}

    Files* files_;
    std::string path_;
    GrowingRunJson json_;
};

/// Makes the folder and proves that a file can be written in it. A default folder that exists gets
/// "-2", "-3", ... at its end, without a race between two runs; --out takes a new or an empty folder
/// and refuses any other, because a record must not mix two runs. `files` must outlive the RunFolder.
/// Errors are of kind output, the place is the path.
Outcome<RunFolder> open_run_folder(Files& files, const RunFolderWish& wish);

/// --out DIR of a call that makes several runs: DIR must be new or empty, is made and proved writable, and each run
/// gets a folder below it.
Outcome<std::string> open_folder_of_runs(Files& files, const std::string& out);

/// Below the run's folder: "captures/003-mains-hum-half-scale.npy". The number keeps two names apart
/// that become the same.
std::string capture_file_name(std::size_t case_number, std::string_view case_name);

/// `text` as a part of a file name: ASCII letters, digits, "-", "_" and "." stay, every run of others
/// becomes one "-", at most 60 characters, never empty and never hidden.
std::string file_name_part(std::string_view text);

}  // namespace halflsb
