// On paper: the response of the filter, and what each case costs on the wire. No board is touched.
#include <cmath>
#include <variant>

#include "runner/commands.hpp"
#include "runner/config/resolved_plan.hpp"
#include "runner/paper.hpp"
#include "runner/report/people.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {
namespace {

std::string decibels(double gain) { return std::isfinite(gain) ? fixed_text(gain, 3) : "none"; }

std::string channels_text(const std::vector<int>& channels) {
    std::string text;
    for (const int channel : channels) text += (text.empty() ? "" : ", ") + std::to_string(channel);
    return (channels.size() == 1 ? "channel " : "channels ") + text;
}

std::string filter_text(const PredictedFilter& filter, bool say_channels, const TextStyle& style) {
    std::string text = "filter   " + (say_channels ? channels_text(filter.channels) + ": " : std::string()) +
                       std::to_string(filter.stages) + (filter.stages == 1 ? " stage" : " stages");
    text += ", largest pole radius " + rounded_text(filter.largest_pole_radius, 6);
    text += ", sum of |h| " + rounded_text(filter.l1_norm) + "\n";
    text += "         gain at 0 Hz " + decibels(filter.dc_gain_db) + " dB";
    if (filter.corner_hz) text += ", 3 dB less at " + rounded_text(*filter.corner_hz) + " Hz";
    text += "\n\n";
    Table table{{{"Hz", true, 0},
                 {"cycles/sample", true, 1},
                 {"design dB", true, 0},
                 {"declared dB", true, 0},
                 {"phase deg", true, 2}},
                {},
                2};
    for (const PredictedFilter::Point& point : filter.response) {
        table.rows.push_back({rounded_text(point.frequency_hz), rounded_text(point.cycles_per_sample),
                              decibels(point.design_db), decibels(point.declared_db),
                              point.phase_degrees ? fixed_text(*point.phase_degrees, 1) : "-"});
    }
    return text + laid_out(style, table);
}

std::string cases_text(const Prediction& prediction, const Rig* rig, const TextStyle& style) {
    Table table{{{"case", false, 0}, {"samples", true, 0}, {"latency", false, 2}, {"wire s", true, 0}}, {}, 2};
    std::int64_t total_samples = 0;
    for (const PredictedCase& predicted : prediction.cases) {
        total_samples += predicted.samples;
        table.rows.push_back({printable(predicted.name), std::to_string(predicted.samples),
                              predicted.latency_told ? "told" : "not told",
                              predicted.wire_s ? fixed_text(*predicted.wire_s, 2) : "-"});
    }
    table.rows.push_back(
        {"all", std::to_string(total_samples), "", prediction.wire_s ? fixed_text(*prediction.wire_s, 2) : "-"});
    std::string text = laid_out(style, table);
    if (rig) {
        text += "  on the wire: " + std::to_string(rig->baud) + " baud, blocks of " +
                std::to_string(rig->block_samples) + " samples, busier direction\n";
    } else {
        text += "  with --rig RIG the time on the wire is told\n";
    }
    return text;
}

std::string prediction_text(const Prediction& prediction, const Rig* rig, const TextStyle& style) {
    const Signal& signal = prediction.signal;
    std::string text = printable(prediction.title) + " (" + printable(prediction.plan_file) + "), on paper\n";
    text += "signal   " + rounded_text(signal.rate_hz, 6) + " Hz, " + text_of(signal.input) + " in, " +
            text_of(signal.output) + " out";
    text += signal.channels > 1 ? ", " + std::to_string(signal.channels) + " channels\n" : "\n";
    if (prediction.filters.empty()) text += "filter   unknown: nothing is told of it on paper\n";
    for (const PredictedFilter& filter : prediction.filters)
        text += filter_text(filter, signal.channels > 1, style) + "\n";
    return text + cases_text(prediction, rig, style);
}

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
    const auto selected = selected_cases(plan, options);
    if (!selected) return tell(selected.error(), options, desk);
    if (interrupted()) return tell(interrupted_error(options.plan), options, desk);

    const Prediction prediction = predict(plan, *selected, rig);
    if (desk.answer != nullptr) desk.answer->set_prediction(prediction);
    const auto written =
        say(desk, prediction_text(prediction, rig, style_of(desk.terminal, Stream::out, options.colour)));
    return written ? 0 : tell(written.error(), options, desk);
}

}  // namespace halflsb
