// explain: what the board of a recorded run does otherwise than its plan says. No board is touched, nothing is written.
#include <variant>

#include "runner/choose_cases.hpp"
#include "runner/cli/exit_status.hpp"
#include "runner/cli/progress.hpp"
#include "runner/commands.hpp"
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

/// Ends the search at an interruption or when the time is over, and shows that it goes on.
class Watch {
public:
    Watch(const Desk& desk, const Options& options, int channels)
        : clock_(desk.clock),
          started_(desk.clock.now()),
          time_limit_s_(options.time_limit_s),
          channels_(channels),
          live_(desk.terminal, desk.clock, !options.verbose && desk.answer == nullptr) {}

    bool go_on(int channel) {
        const double elapsed_s = to_seconds(clock_.now() - started_);
        live_.update({static_cast<std::size_t>(channel), static_cast<std::size_t>(channels_),
                      "searching what channel " + std::to_string(channel) + " does", 0, 0, elapsed_s});
        return !interrupted() && !(time_limit_s_ && elapsed_s > *time_limit_s_);
    }

private:
    const Clock& clock_;
    Instant started_;
    std::optional<double> time_limit_s_;
    int channels_;
    LiveLine live_;
};

}  // namespace

int explain_command(const Options& options, const Desk& desk) {
    std::vector<std::string> problems;
    const auto own = read_own_run(options.run, desk.files, problems);
    if (!problems.empty()) return tell_problems(problems, desk);
    if (!own) return tell(own.error(), options, desk);
    const RecordedRun& record = own->record;
    const Plan& plan = own->plan;
    const auto selected = selected_cases(record, plan, options);
    if (!selected) return tell(selected.error(), options, desk);
    const auto judgement = match_captures(record, plan, false, *selected);
    if (!judgement) return tell(judgement.error(), options, desk);

    Outcome<Explanation> explanation = [&] {
        Watch watch(desk, options, plan.signal.channels);
        return explain_run(record, plan, *judgement, desk.files, [&](int channel) { return watch.go_on(channel); });
    }();
    if (!explanation) return tell(explanation.error(), options, desk);
    if (desk.answer != nullptr) desk.answer->add_explanation(*explanation);
    const std::string version = std::string("halflsb ") + tool_version + "\n";
    const auto written =
        say(desk, version + explanation_text(*explanation, style_of(desk.terminal, Stream::out, options.colour)));
    if (!written) return tell(written.error(), options, desk);
    if (interrupted()) return tell(interrupted_error(options.run), options, desk);
    return exit_status_of(*explanation);
}

}  // namespace halflsb
