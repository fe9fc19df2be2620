// compare: two runs of two builds, sample by sample, and what the board does otherwise since. No board is touched,
// nothing is written.
#include "runner/cli/exit_status.hpp"
#include "runner/commands.hpp"
#include "runner/compare_runs.hpp"
#include "runner/open_captures.hpp"
#include "runner/report/comparison_report.hpp"
#include "runner/search_watch.hpp"
#include "runner/world/interrupt.hpp"

namespace halflsb {

int compare_command(const Options& options, const Desk& desk) {
    std::vector<std::string> problems;
    const auto before = open_captures(options.run, options, desk.files, problems);
    if (!problems.empty()) return tell_problems(problems, desk);
    if (!before) return tell(before.error(), options, desk);
    const auto after = open_captures(options.run_after, options, desk.files, problems);
    if (!problems.empty()) return tell_problems(problems, desk);
    if (!after) return tell(after.error(), options, desk);

    const Outcome<Comparison> comparison = [&] {
        SearchWatch watch(desk, options, before->own.plan.signal.channels);
        return compare_runs(before->part(), after->part(), desk.files,
                            [&](int channel) { return watch.go_on(channel); });
    }();
    if (!comparison) return tell(comparison.error(), options, desk);
    if (desk.answer != nullptr) desk.answer->set_comparison(*comparison);
    const std::string version = std::string("halflsb ") + tool_version + "\n";
    const auto written =
        say(desk, version + comparison_text(*comparison, style_of(desk.terminal, Stream::out, options.colour)));
    if (!written) return tell(written.error(), options, desk);
    if (interrupted()) return tell(interrupted_error(options.run_after), options, desk);
    return exit_status_of(*comparison);
}

}  // namespace halflsb
