// On paper: what the filter and its arithmetic do, what the rules would see, and what each case costs on the wire. No
// board is touched.
#include <optional>
#include <variant>

#include "runner/choose_cases.hpp"
#include "runner/commands.hpp"
#include "runner/config/resolved_plan.hpp"
#include "runner/paper.hpp"
#include "runner/report/prediction_report.hpp"
#include "runner/world/interrupt.hpp"

namespace halflsb {
namespace {

/// The whole plan, whatever --case selects: it is a file to read and to keep.
int print_resolved(const Options& options, const Desk& desk) {
    if (options.json) {
        return tell({ErrorKind::usage, "--resolved", "the plan is TOML, and --json wants a JSON document",
                     "leave one of the two out"},
                    options, desk);
    }
    const auto text = resolved_plan(options.plan, desk.files, {options.root.value_or(""), options.seed});
    if (const auto* wrong = std::get_if<ReadProblems>(&text)) return tell_problems(wrong->texts, desk);
    const auto written = desk.terminal.write(Stream::out, std::get<std::string>(text));
    return written ? 0 : tell(written.error(), options, desk);
}

}  // namespace

int predict_command(const Options& options, const Desk& desk) {
    if (options.resolved) return print_resolved(options, desk);
    const auto read = read_plan_and_rigs(options, desk);
    if (const auto* problems = std::get_if<ReadProblems>(&read)) return tell_problems(problems->texts, desk);
    const auto& [plan, rigs] = std::get<PlanAndRigs>(read);
    const Rig* rig = rigs.empty() ? nullptr : &rigs.front();
    const auto chosen = choose_cases(plan, options, rigs);
    if (!chosen) return tell(chosen.error(), options, desk);
    if (interrupted()) return tell(interrupted_error(options.plan), options, desk);

    const Prediction prediction = predict(plan, chosen->selected, rig, [] { return !interrupted(); });
    if (interrupted()) return tell(interrupted_error(options.plan), options, desk);
    if (desk.answer != nullptr) {
        desk.answer->set_prediction(prediction);
        return 0;
    }
    std::optional<WireOfPrediction> wire;
    if (rig != nullptr) wire = WireOfPrediction{rig->baud, static_cast<std::size_t>(rig->block_samples)};
    const auto written =
        say(desk, prediction_text(prediction, wire, style_of(desk.terminal, Stream::out, options.colour)));
    return written ? 0 : tell(written.error(), options, desk);
}

}  // namespace halflsb
