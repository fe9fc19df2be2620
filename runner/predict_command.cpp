// On paper: the response of the filter, and what each case costs on the wire. No board is touched.
#include <cmath>
#include <variant>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/judge/case_judge.hpp"
#include "oracle/measure/response.hpp"
#include "runner/commands.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/config/rig_file.hpp"
#include "runner/report/people.hpp"
#include "runner/wire/wire_cost.hpp"
#include "runner/world/interrupt.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {
namespace {

std::string decibels(double gain) { return std::isfinite(gain) ? fixed_text(gain, 3) : "none"; }

/// Where the gain first falls 3 dB below that at 0 Hz, by bisection between two points of a fine grid.
std::optional<double> corner_hz(const FilterChain& chain, double rate_hz) {
    const double wanted_db = gain_db(response_at(chain, 0.0)) - 10.0 * std::log10(2.0);
    if (!std::isfinite(wanted_db)) return std::nullopt;
    constexpr int steps = 4096;
    for (int step = 1; step <= steps; ++step) {
        double high = 0.5 * step / steps;
        if (gain_db(response_at(chain, high)) > wanted_db) continue;
        double low = 0.5 * (step - 1) / steps;
        for (int halving = 0; halving < 60; ++halving) {
            const double middle = (low + high) / 2.0;
            (gain_db(response_at(chain, middle)) > wanted_db ? low : high) = middle;
        }
        return high * rate_hz;
    }
    return std::nullopt;
}

std::string filter_text(const Plan& plan, const TextStyle& style) {
    const FilterChain declared = declared_chain(plan.filter);
    const double rate_hz = plan.signal.rate_hz;
    std::string text =
        "filter   " + std::to_string(plan.filter.size()) + (plan.filter.size() == 1 ? " stage" : " stages");
    text += ", largest pole radius " + rounded_text(largest_pole_radius(plan.filter), 6);
    text += ", sum of |h| " + rounded_text(l1_norm(plan.filter)) + "\n";
    const auto corner = corner_hz(plan.filter, rate_hz);
    text += "         gain at 0 Hz " + decibels(gain_db(response_at(plan.filter, 0.0))) + " dB";
    if (corner) text += ", 3 dB less at " + rounded_text(*corner) + " Hz";
    text += "\n\n";
    Table table{{{"Hz", true, 0},
                 {"cycles/sample", true, 1},
                 {"design dB", true, 0},
                 {"declared dB", true, 0},
                 {"phase deg", true, 2}},
                {},
                2};
    constexpr int per_decade = 6, points = 19;
    for (int point = -1; point < points; ++point) {
        const double cycles_per_sample =
            point < 0 ? 0.0 : 0.5 * std::pow(10.0, static_cast<double>(point - points + 1) / per_decade);
        const auto design = response_at(plan.filter, cycles_per_sample);
        constexpr double degrees = 180.0 / 3.14159265358979323846;
        table.rows.push_back({rounded_text(cycles_per_sample * rate_hz), rounded_text(cycles_per_sample),
                              decibels(gain_db(design)), decibels(gain_db(response_at(declared, cycles_per_sample))),
                              std::abs(design) > 0.0 ? fixed_text(std::arg(design) * degrees, 1) : "-"});
    }
    return text + laid_out(style, table);
}

std::string cases_text(const Plan& plan, const std::vector<std::size_t>& selected, const std::optional<Rig>& rig,
                       const TextStyle& style) {
    Table table{{{"case", false, 0}, {"samples", true, 0}, {"latency", false, 2}, {"wire s", true, 0}}, {}, 2};
    double total_s = 0.0;
    std::int64_t total_samples = 0;
    for (const std::size_t index : selected) {
        const Case& the_case = plan.cases[index];
        const std::int64_t samples = the_case.stimulus->length_samples();
        total_samples += samples;
        std::string wire = "-";
        if (rig) {
            const double wire_s = wire_seconds(
                wire_cost(samples, rig->block_samples, plan.signal.input.word_bytes(), plan.signal.output.word_bytes()),
                rig->baud);
            total_s += wire_s;
            wire = fixed_text(wire_s, 2);
        }
        table.rows.push_back({printable(the_case.name), std::to_string(samples),
                              latency_evidence(plan, the_case).can_tell ? "told" : "not told", wire});
    }
    table.rows.push_back({"all", std::to_string(total_samples), "", rig ? fixed_text(total_s, 2) : "-"});
    std::string text = laid_out(style, table);
    if (rig) {
        text += "  on the wire: " + std::to_string(rig->baud) + " baud, blocks of " +
                std::to_string(rig->block_samples) + " samples, busier direction\n";
    } else {
        text += "  with --rig RIG the time on the wire is told\n";
    }
    return text;
}

}  // namespace

int predict_command(const Options& options, const Desk& desk) {
    auto plan = read_plan(options.plan, desk.files, {options.root.value_or(""), std::nullopt});
    std::optional<Rig> rig;
    std::vector<std::string> problems;
    if (auto* wrong = std::get_if<ReadProblems>(&plan)) problems = std::move(wrong->texts);
    if (!options.rig.empty()) {
        auto read = read_rig(options.rig, desk.files);
        if (auto* wrong = std::get_if<ReadProblems>(&read)) {
            problems.insert(problems.end(), wrong->texts.begin(), wrong->texts.end());
        } else {
            rig = std::move(std::get<Rig>(read));
        }
    }
    if (!problems.empty()) return tell_problems(problems, desk);
    const Plan& known = std::get<Plan>(plan);
    const auto selected = selected_cases(known, options);
    if (!selected) return tell(selected.error(), options, desk);
    if (interrupted()) return tell(interrupted_error(options.plan), options, desk);

    const TextStyle style = style_of(desk.terminal, Stream::out, options.colour);
    std::string text = printable(known.title) + " (" + printable(known.file) + "), on paper\n";
    text += "signal   " + rounded_text(known.signal.rate_hz, 6) + " Hz, " + std::string(known.signal.input.name) +
            " in, " + std::string(known.signal.output.name) + " out\n";
    text += filter_text(known, style) + "\n" + cases_text(known, *selected, rig, style);
    const auto written = desk.terminal.write(Stream::out, text);
    return written ? 0 : tell(written.error(), options, desk);
}

}  // namespace halflsb
