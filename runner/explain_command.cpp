// explain: what the board of a recorded run does otherwise than its plan says. Without a rig no board is touched and
// nothing is written.
#include <variant>

#include "runner/ask_board.hpp"
#include "runner/choose_cases.hpp"
#include "runner/cli/exit_status.hpp"
#include "runner/cli/progress.hpp"
#include "runner/commands.hpp"
#include "runner/config/rig_file.hpp"
#include "runner/explain_run.hpp"
#include "runner/open_run.hpp"
#include "runner/report/explanation_report.hpp"
#include "runner/world/interrupt.hpp"

namespace halflsb {
namespace {

Outcome<std::vector<std::size_t>> selected_cases(const RecordedRun& record, const Plan& plan, const Options& options) {
    if (options.case_patterns.empty() && options.labels.empty()) return recorded_cases(record, plan);
    auto chosen = choose_cases(plan, options, {});
    if (!chosen) return chosen.error();
    return std::move(chosen->selected);
}

/// Ends the search at an interruption or when the time is over, and shows what goes on.
class Watch final : public RunObserver {
public:
    Watch(const Desk& desk, const Options& options, int channels)
        : desk_(desk),
          error_style_(style_of(desk.terminal, Stream::err, options.colour)),
          started_(desk.clock.now()),
          time_limit_s_(options.time_limit_s),
          channels_(channels),
          live_(desk.terminal, desk.clock, !options.verbose && desk.answer == nullptr) {}

    bool go_on(int channel) {
        live_.update({static_cast<std::size_t>(channel), static_cast<std::size_t>(channels_),
                      "searching what channel " + std::to_string(channel) + " does", 0, 0,
                      to_seconds(desk_.clock.now() - started_)});
        return has_time();
    }
    bool has_time() const {
        return !interrupted() && !(time_limit_s_ && to_seconds(desk_.clock.now() - started_) > *time_limit_s_);
    }

    void warning(const std::string& text) override { err("warning: " + text); }
    void starting(const RunResult&) override {}
    void greeted(const RunResult& run, std::optional<double>) override { questions_ = run.cases_planned; }
    void progress(std::size_t place, std::int64_t samples_done, std::int64_t samples_total) override {
        live_.update({place, questions_.size(), questions_[place - 1], samples_done, samples_total,
                      to_seconds(desk_.clock.now() - started_)});
    }
    void retrying(const RunResult& run, int attempt, const Error& reason) override {
        err(questions_[run.cases.size()] + ": attempt " + std::to_string(attempt) +
            " gave no whole capture, it runs again: " + reason.problem);
    }
    void finished(const RunResult&) override {}

private:
    void err(const std::string& text) {
        live_.erase();
        if (desk_.answer == nullptr) (void)desk_.terminal.write(Stream::err, wrapped(error_style_, text, 0));
    }

    const Desk& desk_;
    TextStyle error_style_;
    Instant started_;
    std::optional<double> time_limit_s_;
    int channels_;
    LiveLine live_;
    std::vector<std::string> questions_;
};

struct RigFile {
    Rig rig;
    std::string text;
};

/// With a rig the board is asked; without one the captures are all there is.
Outcome<AskResult> explain(const OwnRun& own, const Judgement& judgement, const std::optional<RigFile>& rig,
                           const Desk& desk, Watch& watch) {
    const auto go_on = [&](int channel) { return watch.go_on(channel); };
    if (rig) {
        const AskRequest request{
            tool_version, own, judgement, rig->rig, rig->text, go_on, [&] { return watch.has_time(); }};
        return ask_board(request, desk.files, desk.clock, watch);
    }
    auto explanation = explain_runs({{own.record, own.plan, judgement}}, desk.files, go_on);
    if (!explanation) return explanation.error();
    return AskResult{std::move(*explanation), std::nullopt};
}

}  // namespace

int explain_command(const Options& options, const Desk& desk) {
    std::vector<std::string> problems;
    const auto own = read_own_run(options.run, desk.files, problems);
    if (!problems.empty()) return tell_problems(problems, desk);
    if (!own) return tell(own.error(), options, desk);
    const RecordedRun& record = own->record;
    const Plan& plan = own->plan;
    std::optional<RigFile> rig;
    if (!options.rigs.empty()) {
        auto read = read_rig(options.rigs.front(), desk.files);
        if (const auto* wrong = std::get_if<ReadProblems>(&read)) return tell_problems(wrong->texts, desk);
        auto text = desk.files.read(options.rigs.front(), largest_config_bytes);
        if (!text) return tell(text.error(), options, desk);
        rig = RigFile{std::get<Rig>(std::move(read)), std::move(*text)};
    }
    const auto selected = selected_cases(record, plan, options);
    if (!selected) return tell(selected.error(), options, desk);
    const auto judgement = match_captures(record, plan, false, *selected);
    if (!judgement) return tell(judgement.error(), options, desk);

    Outcome<AskResult> asked = [&] {
        Watch watch(desk, options, plan.signal.channels);
        return explain(*own, *judgement, rig, desk, watch);
    }();
    if (!asked) return tell(asked.error(), options, desk);
    const Explanation& explanation = asked->explanation;
    if (desk.answer != nullptr) desk.answer->add_explanation(explanation);
    const std::string version = std::string("halflsb ") + tool_version + "\n";
    const auto written =
        say(desk, version + explanation_text(explanation, style_of(desk.terminal, Stream::out, options.colour)));
    if (!written) return tell(written.error(), options, desk);
    if (interrupted()) return tell(interrupted_error(options.run), options, desk);
    if (asked->ended_by) return tell(*asked->ended_by, options, desk);
    return exit_status_of(explanation);
}

}  // namespace halflsb
