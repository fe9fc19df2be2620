// explain: what the board of a recorded run does otherwise than its plan says. Without a rig no board is touched and
// nothing is written.
#include <variant>

#include "runner/ask_board.hpp"
#include "runner/cli/exit_status.hpp"
#include "runner/commands.hpp"
#include "runner/config/rig_file.hpp"
#include "runner/open_captures.hpp"
#include "runner/report/explanation_report.hpp"
#include "runner/search_watch.hpp"
#include "runner/world/interrupt.hpp"

namespace halflsb {
namespace {

struct RigFile {
    Rig rig;
    std::string text;
};

/// With a rig the board is asked; without one the captures are all there is.
Outcome<AskResult> explain(const OpenedCaptures& run, const std::optional<RigFile>& rig, const Desk& desk,
                           SearchWatch& watch) {
    const auto go_on = [&](int channel) { return watch.go_on(channel); };
    if (rig) {
        const AskRequest request{tool_version, run, rig->rig, rig->text, go_on, [&] { return watch.has_time(); }};
        return ask_board(request, desk.files, desk.clock, watch);
    }
    auto explanation = explain_runs({run.part()}, desk.files, go_on);
    if (!explanation) return explanation.error();
    return AskResult{std::move(*explanation), std::nullopt};
}

}  // namespace

int explain_command(const Options& options, const Desk& desk) {
    std::vector<std::string> problems;
    const auto run = open_captures(options.run, options, desk.files, problems);
    if (!problems.empty()) return tell_problems(problems, desk);
    if (!run) return tell(run.error(), options, desk);
    std::optional<RigFile> rig;
    if (!options.rigs.empty()) {
        auto read = read_rig(options.rigs.front(), desk.files);
        if (const auto* wrong = std::get_if<ReadProblems>(&read)) return tell_problems(wrong->texts, desk);
        auto text = desk.files.read(options.rigs.front(), largest_config_bytes);
        if (!text) return tell(text.error(), options, desk);
        rig = RigFile{std::get<Rig>(std::move(read)), std::move(*text)};
    }
    Outcome<AskResult> asked = [&] {
        SearchWatch watch(desk, options, run->own.plan.signal.channels);
        return explain(*run, rig, desk, watch);
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
