// The files of a run's folder against the hashes of its record.
#include <algorithm>
#include <array>
#include <cstddef>
#include <map>
#include <memory>
#include <span>
#include <vector>

#include "runner/record/json_text.hpp"
#include "runner/record/recorded_run.hpp"
#include "runner/record/run_document.hpp"
#include "runner/record/run_json.hpp"
#include "runner/record/strict_json.hpp"
#include "runner/world/printable.hpp"
#include "runner/world/sha256.hpp"
#include "stimuli/npy.hpp"

namespace halflsb {

namespace {

Outcome<std::unique_ptr<InputFile>> open_recorded(const RecordedRun& record, const Files& files,
                                                  const std::string& name) {
    if (!files.exists(record.path_of(name))) {
        return Error{ErrorKind::input, record.path_of(name), "it is missing: the record names it",
                     "put it back, or capture anew with halflsb check"};
    }
    const auto path = path_inside(files, record.folder, name);
    if (!path) return path.error();
    return files.open_input(*path);
}

/// SHA-256 of the file from byte `from` on, in pieces of constant size.
Outcome<std::string> digest_of(InputFile& file, std::int64_t from) {
    Sha256 digest;
    std::array<std::byte, 65536> piece;
    const std::int64_t size = file.size_bytes();
    while (from < size) {
        const auto part = std::span(piece).first(
            static_cast<std::size_t>(std::min<std::int64_t>(static_cast<std::int64_t>(piece.size()), size - from)));
        if (auto read = file.read(from, part); !read) return read.error();
        digest.add(part);
        from += static_cast<std::int64_t>(part.size());
    }
    return digest.value();
}

Outcome<void> compare(const std::string& shown, const Outcome<std::string>& digest, const std::string& recorded) {
    if (!digest) return digest.error();
    if (*digest == recorded) return {};
    return Error{ErrorKind::input, shown, "it was edited: its SHA-256 is not the recorded one",
                 "put the file of the run back, or capture anew with halflsb check"};
}

Outcome<void> check_file(const RecordedRun& record, const Files& files, const std::string& name,
                         const std::string& sha256) {
    auto file = open_recorded(record, files, name);
    if (!file) return file.error();
    return compare(record.path_of(name), digest_of(**file, 0), sha256);
}

/// The hash of a stimulus is that of its codes: the data of the file, without its header.
Outcome<void> check_stimulus(const RecordedRun& record, const Files& files, const CaseResult& result) {
    if (result.stimulus.sha256.empty()) return {};  // not all of it was sent, nothing of it is judged
    const std::string shown = record.path_of(result.stimulus.file);
    auto file = open_recorded(record, files, result.stimulus.file);
    if (!file) return file.error();
    std::vector<std::byte> front(static_cast<std::size_t>(
        std::min<std::int64_t>((*file)->size_bytes(), static_cast<std::int64_t>(npy_longest_header_bytes))));
    if (auto read = (*file)->read(0, front); !read) return read;
    const auto header = parse_npy_header(front);
    if (!header) {
        return Error{ErrorKind::input, shown, header.error().place + ": " + header.error().problem,
                     "put the file of the run back, or capture anew with halflsb check"};
    }
    return compare(shown, digest_of(**file, static_cast<std::int64_t>(header->data_offset)), result.stimulus.sha256);
}

}  // namespace

Outcome<std::string> path_inside(const Files& files, const std::string& folder, const std::string& file) {
    const std::string path = files.resolved(folder + "/" + file), base = files.resolved(folder);
    if (path.empty() || base.empty()) {
        return Error{ErrorKind::input, folder + "/" + file, "there is no such file", "put it back"};
    }
    const std::string prefix = base == "/" ? base : base + "/";
    if (path.size() <= prefix.size() || path.compare(0, prefix.size(), prefix) != 0) {
        return Error{ErrorKind::input, folder + "/" + file, "it leads out of the folder, to " + printable(path),
                     "the files of a record lie in its folder"};
    }
    return path;
}

Outcome<void> check_recorded_files(const RecordedRun& record, const Files& files) {
    const RunResult& run = record.run;
    if (auto same = check_file(record, files, "plan.toml", run.plan_sha256); !same) return same;
    if (auto same = check_file(record, files, "rig.toml", run.rig_sha256); !same) return same;
    for (const auto& [path, sha256] : record.plan_files) {
        if (auto same =
                check_file(record, files, record.plan_root().substr(record.folder.size() + 1) + "/" + path, sha256);
            !same)
            return same;
    }
    for (const CaseResult& result : run.cases) {
        if (!result.capture_file.empty()) {
            if (auto same = check_file(record, files, result.capture_file, result.capture_sha256); !same) return same;
        }
        if (!result.ticks_file.empty()) {
            if (auto same = check_file(record, files, result.ticks_file, result.ticks_sha256); !same) return same;
        }
        if (!result.stimulus.file.empty()) {
            if (auto same = check_stimulus(record, files, result); !same) return same;
        }
        for (const AttemptResult& attempt : result.attempts) {
            if (attempt.capture_file.empty()) continue;
            if (auto same = check_file(record, files, attempt.capture_file, attempt.capture_sha256); !same) return same;
        }
    }
    return {};
}

Outcome<std::string> judged_run_json(const RecordedRun& record, const RunResult& judged, bool another_plan) {
    auto json = parse_json_strictly(record.document, record.path_of("run.json"));
    if (!json) return json.error();
    Json head = Json::object();
    for (const auto& [key, value] : json->items()) {
        if (key == "verdict" || key == "cases") continue;
        head[key] = value;
    }
    head["content_sha256"] = unsealed_sha256;
    if (another_plan) head["plan"] = plan_json(judged);
    head["ended_by"] = error_json(judged.ended_by);
    head["warnings"] = judged.warnings;
    head["cases_planned"] = judged.cases_planned;
    std::map<std::string, Json*> recorded;
    for (Json& one : (*json)["cases"]) recorded[one["name"].get<std::string>()] = &one;
    std::vector<std::string> cases;
    for (const CaseResult& result : judged.cases) {
        const auto found = recorded.find(result.name);
        if (found == recorded.end()) {
            return Error{ErrorKind::defect, record.folder, "a case was judged that was not recorded", ""};
        }
        (*found->second)["number"] = result.number;
        cases.push_back(json_value_text(*found->second, run_case_level));
    }
    return joined_document(head, verdict_text(judged), cases);
}

}  // namespace halflsb
