#include <algorithm>
#include <set>
#include <variant>

#include "runner/choose_cases.hpp"
#include "runner/cli/exit_status.hpp"
#include "runner/cli/progress.hpp"
#include "runner/commands.hpp"
#include "runner/config/firmware_image.hpp"
#include "runner/config/repository.hpp"
#include "runner/open_captures.hpp"
#include "runner/record/run_folder.hpp"
#include "runner/record/run_json.hpp"
#include "runner/report/explanation_report.hpp"
#include "runner/report/terminal_report.hpp"
#include "runner/run_plan.hpp"
#include "runner/world/interrupt.hpp"

namespace halflsb {
namespace {

/// Prints a run while it happens: results to standard output, the live line to standard error.
class Reporter final : public RunObserver {
public:
    Reporter(const Desk& desk, const Options& options)
        : desk_(desk),
          style_(style_of(desk.terminal, Stream::out, options.colour)),
          error_style_(style_of(desk.terminal, Stream::err, options.colour)),
          live_(desk.terminal, desk.clock, !options.verbose) {}

    void warning(const std::string& text) override { err(wrapped(error_style_, "warning: " + text, 0)); }
    void starting(const RunResult& run) override { out(start_text(run, style_)); }
    void greeted(const RunResult& run, std::optional<double> wire_s) override {
        names_ = run.cases_planned;
        case_started_ = desk_.clock.now();
        out(board_text(run, wire_s, style_));
    }
    void progress(std::size_t place, std::int64_t samples_done, std::int64_t samples_total) override {
        live_.update({place, names_.size(), names_[place - 1], samples_done, samples_total,
                      to_seconds(desk_.clock.now() - case_started_)});
    }
    void retrying(const RunResult& run, int attempt, const Error& reason) override {
        err(wrapped(error_style_,
                    "case \"" + names_[run.cases.size()] + "\": attempt " + std::to_string(attempt) +
                        " gave no whole capture, it runs again: " + reason.problem,
                    0));
    }
    void finished(const RunResult& run) override {
        case_started_ = desk_.clock.now();
        out(case_text(run, run.cases.size() - 1, style_));
    }
    void ended(const RunResult& run) {
        live_.erase();
        if (desk_.answer != nullptr) {
            if (run.ended_by) desk_.answer->set_error(*run.ended_by);
            if (!run.folder.empty()) desk_.answer->add_run(run_json(run, true));
        }
        // The summary tells it too: on one terminal once is enough, a log of standard error needs it.
        const bool one_terminal = desk_.terminal.is_terminal(Stream::out) && desk_.terminal.is_terminal(Stream::err);
        if (run.ended_by && (run.folder.empty() || !one_terminal)) err(error_text(*run.ended_by, error_style_));
        if (!run.folder.empty()) out(summary_text(run, style_));
    }
    /// What explains a run in which a rule failed; nothing is said where nothing was found out.
    void explained(const Explanation& explanation) {
        out(explained_lines(explanation, style_));
        if (desk_.answer != nullptr) desk_.answer->add_explanation(explanation);
    }
    /// Standard output could not be written: a report nobody got must not end in "pass".
    const std::optional<Error>& lost() const { return lost_; }

private:
    void out(const std::string& text) {
        live_.erase();
        if (auto written = say(desk_, text); !written && !lost_) lost_ = written.error();
    }
    void err(const std::string& text) {
        live_.erase();
        if (desk_.answer == nullptr) (void)desk_.terminal.write(Stream::err, text);
    }

    const Desk& desk_;
    TextStyle style_, error_style_;
    LiveLine live_;
    std::vector<std::string> names_;
    Instant case_started_{};
    std::optional<Error> lost_;
};

/// What differs from rig to rig: everything of a request but the plan.
Outcome<void> read_rig_into(RunRequest& request, const std::string& path, Rig rig, const Options& options,
                            const Desk& desk) {
    request.rig = std::move(rig);
    auto text = desk.files.read(path, largest_config_bytes);
    if (!text) return text.error();
    request.rig_text = std::move(*text);
    if (options.image) {
        auto build_id = read_build_id(*options.image, desk.files);
        if (!build_id) return build_id.error();
        // Commands run in the rig's folder: a relative path would mean another file there.
        request.image = Image{desk.files.resolved(*options.image), *build_id};
    } else if (wants_image(request.rig)) {
        return Error{ErrorKind::usage, path, "before_run needs {image}, and there is no --image",
                     "give the image to flash: --image FIRMWARE.elf"};
    }
    if (auto warning = rig_in_repository_warning(path, options.plan, desk.files)) request.warnings.push_back(*warning);
    return {};
}

std::string stem_of(const std::string& path) {
    std::string stem = path.substr(path.rfind('/') + 1);
    stem.resize(std::min(stem.rfind('.'), stem.size()));
    return file_name_part(stem);
}

/// Where each run goes when there are several: below --out a folder for each rig, else the default's name with the
/// rig's at its end.
void name_folders(std::vector<RunRequest>& requests, const Options& options) {
    if (requests.size() < 2) return;
    std::set<std::string> taken;
    for (RunRequest& request : requests) {
        const std::string stem = stem_of(request.rig.file);
        std::string name = stem;
        for (int i = 2; !taken.insert(name).second; ++i) name = stem + "-" + std::to_string(i);
        if (options.out) request.out = *options.out + "/" + name;
        request.folder_note = name;
    }
}

Outcome<std::vector<RunRequest>> make_requests(PlanAndRigs files, const Options& options, const Desk& desk) {
    std::vector<RunRequest> requests;
    RunRequest common;
    common.tool_version = tool_version;
    common.plan = std::move(files.plan);
    auto text = desk.files.read(options.plan, largest_config_bytes);
    if (!text) return text.error();
    common.plan_text = std::move(*text);
    auto chosen = choose_cases(common.plan, options, files.rigs);
    if (!chosen) return chosen.error();
    common.selected = std::move(chosen->selected);
    common.left_out = std::move(chosen->left_out);
    common.why_left_out = std::move(chosen->why_left_out);
    common.out = options.out;
    common.seed = options.seed;
    common.root = options.root;
    for (std::size_t i = 0; i < files.rigs.size(); ++i) {
        requests.push_back(common);
        if (auto read = read_rig_into(requests.back(), options.rigs[i], std::move(files.rigs[i]), options, desk); !read)
            return read.error();
    }
    name_folders(requests, options);
    if (requests.size() > 1 && options.out) {
        if (auto made = open_folder_of_runs(desk.files, *options.out); !made) return made.error();
    }
    return requests;
}

/// A job does not wait for it longer.
constexpr double longest_explaining_s = 10.0;

void explain_failed(const RunResult& run, const Desk& desk, Reporter& reporter) {
    if (run.counts().fail == 0 || run.ended_by || interrupted()) return;
    const Instant started = desk.clock.now();
    const auto captures = open_fresh_captures(run.folder, desk.files);
    if (!captures) return;
    const auto explanation = explain_runs({captures->part()}, desk.files, [&](int) {
        return !interrupted() && to_seconds(desk.clock.now() - started) < longest_explaining_s;
    });
    if (explanation) reporter.explained(*explanation);
}

}  // namespace

int check_command(const Options& options, const Desk& desk) {
    auto read = read_plan_and_rigs(options, desk);
    if (const auto* problems = std::get_if<ReadProblems>(&read)) return tell_problems(problems->texts, desk);
    const auto requests = make_requests(std::move(std::get<PlanAndRigs>(read)), options, desk);
    if (!requests) return tell(requests.error(), options, desk);
    if (interrupted()) return tell(interrupted_error(options.plan), options, desk);

    std::vector<RunOfRig> runs;
    std::vector<int> statuses;
    std::optional<Error> lost;
    for (const RunRequest& request : *requests) {
        Reporter reporter(desk, options);
        RunResult run = run_plan(request, desk.files, desk.clock, reporter);
        reporter.ended(run);
        explain_failed(run, desk, reporter);
        statuses.push_back(exit_status_of(run));
        runs.push_back({request.rig.file, run.counts(), run.folder, statuses.back()});
        if (!lost) lost = reporter.lost();
        if (stops_everything(statuses.back()) || interrupted()) break;
    }
    if (requests->size() > 1) {
        for (std::size_t i = runs.size(); i < requests->size(); ++i)
            runs.push_back({(*requests)[i].rig.file, {}, "", std::nullopt});
        const auto written = say(desk, rigs_text(runs, style_of(desk.terminal, Stream::out, options.colour)));
        if (!written && !lost) lost = written.error();
        // Interrupted between two of them: the rest did not run.
        if (statuses.size() < requests->size() && !stops_everything(exit_status_of_all(statuses)))
            statuses.push_back(exit_status_of(interrupted_error(options.plan)));
    }
    // A verdict that nobody could read is none, whichever it is; the record has it.
    if (lost) return tell(*lost, options, desk);
    return exit_status_of_all(statuses);
}

}  // namespace halflsb
