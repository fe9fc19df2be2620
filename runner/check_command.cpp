#include <variant>

#include "runner/cli/exit_status.hpp"
#include "runner/cli/progress.hpp"
#include "runner/commands.hpp"
#include "runner/config/firmware_image.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/config/repository.hpp"
#include "runner/config/rig_file.hpp"
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
        // The summary tells it too: on one terminal once is enough, a log of standard error needs it.
        const bool one_terminal = desk_.terminal.is_terminal(Stream::out) && desk_.terminal.is_terminal(Stream::err);
        if (run.ended_by && (run.folder.empty() || !one_terminal)) err(error_text(*run.ended_by, error_style_));
        if (!run.folder.empty()) out(summary_text(run, style_));
    }
    /// Standard output could not be written: a report nobody got must not end in "pass".
    const std::optional<Error>& lost() const { return lost_; }

private:
    void out(const std::string& text) {
        live_.erase();
        if (auto written = desk_.terminal.write(Stream::out, text); !written && !lost_) lost_ = written.error();
    }
    void err(const std::string& text) {
        live_.erase();
        (void)desk_.terminal.write(Stream::err, text);
    }

    const Desk& desk_;
    TextStyle style_, error_style_;
    LiveLine live_;
    std::vector<std::string> names_;
    Instant case_started_{};
    std::optional<Error> lost_;
};

/// Both files are read before anything is said, so that all their problems are told at once.
Outcome<RunRequest> read_request(const Options& options, const Desk& desk, std::vector<std::string>& problems) {
    RunRequest request;
    request.tool_version = tool_version;
    auto plan = read_plan(options.plan, desk.files, {options.root.value_or(""), options.seed});
    auto rig = read_rig(options.rig, desk.files);
    if (auto* wrong = std::get_if<ReadProblems>(&plan)) problems = std::move(wrong->texts);
    if (auto* wrong = std::get_if<ReadProblems>(&rig))
        problems.insert(problems.end(), wrong->texts.begin(), wrong->texts.end());
    if (!problems.empty()) return request;
    request.plan = std::move(std::get<Plan>(plan));
    request.rig = std::move(std::get<Rig>(rig));
    for (const auto& [path, text] :
         {std::pair{&options.plan, &request.plan_text}, std::pair{&options.rig, &request.rig_text}}) {
        auto read = desk.files.read(*path, largest_config_bytes);
        if (!read) return read.error();
        *text = std::move(*read);
    }
    auto selected = selected_cases(request.plan, options);
    if (!selected) return selected.error();
    request.selected = std::move(*selected);
    if (options.image) {
        auto build_id = read_build_id(*options.image, desk.files);
        if (!build_id) return build_id.error();
        // Commands run in the rig's folder: a relative path would mean another file there.
        request.image = Image{desk.files.resolved(*options.image), *build_id};
    } else if (wants_image(request.rig)) {
        return Error{ErrorKind::usage, options.rig, "before_run needs {image}, and there is no --image",
                     "give the image to flash: --image FIRMWARE.elf"};
    }
    if (auto warning = rig_in_repository_warning(options.rig, options.plan, desk.files))
        request.warnings.push_back(*warning);
    request.out = options.out;
    request.seed = options.seed;
    request.root = options.root;
    return request;
}

}  // namespace

int check_command(const Options& options, const Desk& desk) {
    std::vector<std::string> problems;
    const auto request = read_request(options, desk, problems);
    if (!problems.empty()) return tell_problems(problems, desk);
    if (!request) return tell(request.error(), options, desk);
    if (interrupted()) return tell(interrupted_error(options.plan), options, desk);

    Reporter reporter(desk, options);
    const RunResult run = run_plan(*request, desk.files, desk.clock, reporter);
    reporter.ended(run);
    const int status = exit_status_of(run);
    if (reporter.lost() && status == 0) return tell(*reporter.lost(), options, desk);
    return status;
}

}  // namespace halflsb
