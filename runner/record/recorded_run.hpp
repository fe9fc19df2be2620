// A run's folder read back, so that its captures can be judged again or accepted. It may come from elsewhere: nothing
// in it is believed before it was checked, no file outside of it is opened, and nothing is ever written to it.
#pragma once

#include <cstdint>
#include <string>
#include <utility>
#include <vector>

#include "runner/world/files.hpp"
#include "runner/world/result.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// Ten thousand cases with long response rules have less.
inline constexpr std::size_t largest_run_json_bytes = std::size_t{256} << 20;

/// What the captures were made of, as the record states it: names of formats without their layout on the wire, which
/// leaves no trace in a capture.
struct RecordedSignal {
    double rate_hz = 0.0;
    std::string input, output;
    int channels = 1;
};

struct RecordedRun {
    std::string folder;
    std::string document;  ///< run.json, byte for byte
    /// As recorded. Rules, figures and recipes of stimuli are not read: judging makes the former anew from plan and
    /// captures. plan_parts have paths and no bytes.
    RunResult run;
    RecordedSignal signal;
    /// Files that plan.toml was read from beside itself: path below plan-files/ and SHA-256.
    std::vector<std::pair<std::string, std::string>> plan_files;

    std::string path_of(const std::string& file) const { return folder + "/" + file; }
    std::string plan_path() const { return path_of("plan.toml"); }
    /// The root under which the recorded plan finds its files.
    std::string plan_root() const;
};

/// Opens a folder that `check` left. Refused, as errors of kind input that name the file and what is wrong: a folder
/// that is missing or without run.json (not one of ours), another format, one of an older or a newer version (naming
/// the version of halflsb that wrote it), a run that died (`finished` is false), repeated keys, wrong types, names of
/// files that lie outside the folder.
Outcome<RecordedRun> read_recorded_run(const Files& files, const std::string& folder);

/// Every file of the record against its SHA-256: plan, rig, files of the plan, captures, explicit stimuli. A missing
/// or an edited one is an error of kind input with its path.
Outcome<void> check_recorded_files(const RecordedRun& record, const Files& files);

/// `file` below the folder with all links followed; an error of kind input when that leads out of the folder.
Outcome<std::string> path_inside(const Files& files, const std::string& folder, const std::string& file);

/// run.json of the run with what was judged now in place of what is recorded: verdict, cases planned, warnings, what
/// ended it, and the plan when it is `another_plan`. Without such a change it is the recorded document, byte for byte.
Outcome<std::string> judged_run_json(const RecordedRun& record, const RunResult& judged, bool another_plan);

}  // namespace halflsb
