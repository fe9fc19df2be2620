#include "runner/record/run_folder.hpp"

#include <algorithm>
#include <array>
#include <filesystem>
#include <system_error>
#include <vector>

#include "runner/record/run_json.hpp"

namespace halflsb {

namespace {

namespace fs = std::filesystem;

constexpr std::size_t longest_part = 60;
/// Runs of one plan that start within one second in one folder.
constexpr int most_namesakes = 1000;
/// A whole page, so that a full disk shows.
constexpr std::size_t probe_bytes = 4096;

Error output_error(const std::string& path, std::string problem, std::string remedy) {
    return {ErrorKind::output, path, std::move(problem), std::move(remedy)};
}

/// "2026-12-01T09:30:00Z" as "20261201T093000Z".
std::string compact(const std::string& utc) {
    std::string text;
    std::copy_if(utc.begin(), utc.end(), std::back_inserter(text), [](char c) { return c != '-' && c != ':'; });
    return text;
}

Outcome<std::string> claim_default(Files& files, const RunFolderWish& wish) {
    const std::string base = ".halflsb";
    if (auto made = files.make_directories(base); !made) return made.error();
    const std::string stem = file_name_part(fs::path(wish.plan_file).stem().string());
    const std::string wanted = base + "/" + compact(wish.started_utc) + "-" + stem +
                               (wish.note.empty() ? "" : "-" + file_name_part(wish.note));
    for (int i = 1; i <= most_namesakes; ++i) {
        const std::string path = i == 1 ? wanted : wanted + "-" + std::to_string(i);
        // One call makes it and tells whether it was there: two runs never share a folder.
        std::error_code error;
        if (fs::create_directory(path, error)) return path;
        if (error && error != std::errc::file_exists && error != std::errc::not_a_directory) {
            return output_error(path, "the run's folder cannot be made: " + error.message(),
                                "give this user the right to write there, or choose another folder with --out");
        }
    }
    return output_error(wanted, "this name and " + std::to_string(most_namesakes - 1) + " like it are taken",
                        "choose another folder with --out");
}

Outcome<std::string> claim_given(Files& files, const std::string& out) {
    std::string path = out;
    while (path.size() > 1 && path.back() == '/') path.pop_back();
    if (path.empty()) return output_error("--out", "the folder has no name", "give a new or an empty folder");
    std::error_code error;
    const bool there = fs::exists(path, error);
    if (there && !fs::is_directory(path, error)) {
        return output_error(path, "it exists and is not a folder", "give a new or an empty folder with --out");
    }
    if (there && !fs::is_empty(path, error)) {
        if (error) return output_error(path, "it cannot be read: " + error.message(), "give a new folder with --out");
        return output_error(path, "it is not empty, and a record must not mix two runs",
                            "give a new or an empty folder with --out");
    }
    if (auto made = files.make_directories(path); !made) return made.error();
    return path;
}

Outcome<void> prove_writable(Files& files, const std::string& folder) {
    auto probe = files.open_output(folder + "/probe");
    if (!probe) return probe.error();
    const std::vector<std::byte> page(probe_bytes);
    auto written = (*probe)->write(page);
    (*probe)->discard();
    return written;
}

}  // namespace

std::string RunFolder::path_of(std::string_view file) const { return path_ + "/" + std::string(file); }

Outcome<void> RunFolder::save_inputs(const RunResult& run) {
    if (auto written = files_->write(path_of("plan.toml"), run.plan_text); !written) return written;
    if (auto written = files_->write(path_of("rig.toml"), run.rig_text); !written) return written;
    // Made in any case: it is the root under which the plan is read again.
    const std::string root = path_of(plan_files_folder);
    if (auto made = files_->make_directories(root); !made) return made;
    for (const PlanPart& part : run.plan_parts) {
        if (part.path.empty()) continue;  // the plan itself
        const std::string path = root + "/" + part.path;
        if (auto made = files_->make_directories(path.substr(0, path.rfind('/'))); !made) return made;
        if (auto written = files_->write(path, part.bytes); !written) return written;
    }
    return {};
}

Outcome<void> RunFolder::save(const RunResult& run, bool finished, const std::string& junit_xml) {
    if (auto written = files_->write(path_of("run.json"), json_.document(run, finished)); !written) return written;
    return files_->write(path_of("junit.xml"), junit_xml);
}

Outcome<void> RunFolder::save_page(const std::string& report_html) {
    return files_->write(path_of("report.html"), report_html);
}

Outcome<RunFolder> open_run_folder(Files& files, const RunFolderWish& wish) {
    auto path = wish.out ? claim_given(files, *wish.out) : claim_default(files, wish);
    if (!path) return path.error();
    if (auto made = files.make_directories(*path + "/captures"); !made) return made.error();
    if (auto proved = prove_writable(files, *path); !proved) return proved.error();
    return RunFolder(files, *path);
}

Outcome<std::string> open_folder_of_runs(Files& files, const std::string& out) {
    auto path = claim_given(files, out);
    if (!path) return path;
    if (auto proved = prove_writable(files, *path); !proved) return proved.error();
    return path;
}

std::string capture_file_name(std::size_t case_number, std::string_view case_name) {
    std::string number = std::to_string(case_number);
    number.insert(0, number.size() < 3 ? 3 - number.size() : 0, '0');
    return "captures/" + number + "-" + file_name_part(case_name) + ".npy";
}

std::string file_name_part(std::string_view text) {
    const auto stays = [](char c) {
        return (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || (c >= '0' && c <= '9') || c == '-' || c == '_' ||
               c == '.';
    };
    std::string part;
    for (const char c : text) {
        if (stays(c)) {
            part += c;
        } else if (!part.empty() && part.back() != '-') {
            part += '-';
        }
    }
    part.erase(0, std::min(part.find_first_not_of(".-"), part.size()));
    part.resize(std::min(part.size(), longest_part));
    part.erase(part.find_last_not_of(".-") + 1);
    return part.empty() ? "unnamed" : part;
}

}  // namespace halflsb
