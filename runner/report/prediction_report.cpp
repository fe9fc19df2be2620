#include "runner/report/prediction_report.hpp"

#include <algorithm>
#include <cmath>

#include "runner/report/arithmetic_report.hpp"
#include "runner/report/people.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

namespace {

std::string decibels(double gain) { return gain > -280.0 ? fixed_text(gain, 3) : "none"; }

std::string channels_text(const std::vector<int>& channels) {
    std::string text;
    for (const int channel : channels) text += (text.empty() ? "" : ", ") + std::to_string(channel);
    return (channels.size() == 1 ? "channel " : "channels ") + text;
}

std::string response_text(const PredictedFilter& filter, const TextStyle& style) {
    Table table{{{"Hz", true, 0},
                 {"cycles/sample", true, 1},
                 {"design dB", true, 0},
                 {"declared dB", true, 0},
                 {"phase deg", true, 3},
                 {"delay samples", true, 2}},
                {},
                2};
    for (const PredictedPoint& point : filter.response) {
        table.rows.push_back({rounded_text(point.frequency_hz), rounded_text(point.cycles_per_sample),
                              decibels(point.design_db), decibels(point.declared_db),
                              point.phase_degrees ? fixed_text(*point.phase_degrees, 1) : "-",
                              point.group_delay_samples ? fixed_text(*point.group_delay_samples, 2) : "-"});
    }
    return "\n" + laid_out(style, table);
}

std::string price_text(const PredictedPrice& price, const Signal& signal, const TextStyle& style) {
    if (price.gain_difference_db == 0.0 && price.output_difference == 0.0)
        return "price    of the coefficients' word length: none, the design is computed as it is\n";
    std::string text = "price    of the coefficients' word length, design -> declared\n";
    if (price.gain_difference_db) {
        text += wrapped(style,
                        "gain, where the design is within " + rounded_text(price.passband_db) +
                            " dB of its peak: at most " + rounded_text(std::fabs(*price.gain_difference_db)) +
                            " dB off, at " + rounded_text(*price.at_hz) + " Hz",
                        2);
    }
    text += wrapped(style,
                    price.output_difference ? "output, for any input of full scale: at most " +
                                                  rounded_text(*price.output_difference) + unit_text(signal) + " off"
                                            : "output: not told, the response rings for more than 2^21 samples",
                    2);
    std::string line;
    if (price.design_dc_gain && price.declared_dc_gain) {
        line = "gain at 0 Hz " + rounded_text(*price.design_dc_gain, 6) + " -> " +
               rounded_text(*price.declared_dc_gain, 6) + ", ";
    }
    line += "largest pole radius " + rounded_text(price.design_pole_radius, 6) + " -> " +
            rounded_text(price.declared_pole_radius, 6);
    return text + wrapped(style, line, 2);
}

std::string warnings_text(const PredictedFilter& filter, const TextStyle& style) {
    std::string text;
    for (const RecursionWarning& warning : filter.warnings) {
        text += wrapped(style,
                        "warning: stage " + std::to_string(warning.stage) + ", a b/a form of order " +
                            std::to_string(warning.order) + ", may lose " + rounded_text(warning.loss) +
                            " LSB of the output in its own recursion, in double precision; write it as sections "
                            "(kind = \"biquad-cascade\")",
                        0);
    }
    return text;
}

std::string filter_text(const PredictedFilter& filter, const Signal& signal, const TextStyle& style) {
    std::string text = "filter   " + (signal.channels > 1 ? channels_text(filter.channels) + ": " : std::string()) +
                       std::to_string(filter.stages) + (filter.stages == 1 ? " stage" : " stages");
    text += ", largest pole radius " + rounded_text(filter.largest_pole_radius, 6);
    text += ", sum of |h| " + rounded_text(filter.l1_norm) + "\n";
    if (!filter.response.empty()) {
        text += filter.dc_gain_db > -280.0 ? "         gain at 0 Hz " + decibels(filter.dc_gain_db) + " dB"
                                           : std::string("         nothing comes through at 0 Hz");
        if (filter.corner_hz) text += ", 3 dB less at " + rounded_text(*filter.corner_hz) + " Hz";
        text += "\n";
    }
    if (!filter.missing.empty()) text += wrapped(style, filter.missing, 9);
    text += warnings_text(filter, style);
    if (!filter.response.empty()) text += response_text(filter, style);
    text += "\n";
    if (filter.price) text += price_text(*filter.price, signal, style) + "\n";
    if (!filter.arithmetic) return text;
    text += bound_text(*filter.arithmetic, signal, style) + "\n";
    if (const std::string headroom = headroom_text(*filter.arithmetic, style); !headroom.empty())
        text += headroom + "\n";
    if (const std::string silence = silence_text(*filter.arithmetic, signal, style); !silence.empty())
        text += silence + "\n";
    return text;
}

std::string answer_text(const ChangeSeen& change, const Signal& signal) {
    switch (change.answer) {
        case ChangeSeen::Answer::seen:
            return "seen by " + change.rule + " in \"" + printable(change.case_name) + "\"";
        case ChangeSeen::Answer::unseen:
            return "not seen: " + counted(change.differing, "sample differs", "samples differ") + " by up to " +
                   rounded_text(change.largest_lsb) + unit_text(signal);
        case ChangeSeen::Answer::same:
            break;
    }
    return "makes no difference here";
}

std::string sight_text(const PredictedSight& sight, const Signal& signal, const TextStyle& style) {
    const Sensitivity& told = sight.sensitivity;
    if (!told.unknown.empty())
        return wrapped(style, "rules    what they would see of another arithmetic is not told: " + told.unknown, 0) +
               "\n";
    std::string text = wrapped(style,
                               "rules    what they would see of a firmware that decided otherwise" +
                                   std::string(sight.rounding_is_assumed ? ", half-up taken for the rounding" : ""),
                               0);
    if (!told.failing_rule.empty()) {
        text += wrapped(style,
                        "warning: a firmware that computes as promised fails " + told.failing_rule + " in \"" +
                            printable(told.failing_case) +
                            "\", so what is seen there tells nothing; write \"derived\" for its limits, or wider ones",
                        2);
    }
    Table table{{{"change", false, 0}, {"rules of this plan", false, 0}}, {}, 2};
    bool some_unseen = false;
    for (const ChangeSeen& change : told.changes) {
        some_unseen = some_unseen || change.answer == ChangeSeen::Answer::unseen;
        table.rows.push_back({change.change, answer_text(change, signal)});
    }
    text += laid_out(style, table);
    if (some_unseen && !sight.has_exact_rule) {
        text += wrapped(style,
                        std::string("what is not seen, a rule kind = \"exact\" sees; add it") +
                            (sight.rounding_is_assumed ? " and the rounding that it needs" : ""),
                        2);
    }
    if (sight.cases_left_out > 0)
        text += wrapped(style,
                        "looked at the first " + counted(static_cast<std::int64_t>(sight.cases), "case", "cases") +
                            " only, " + std::to_string(sight.cases_left_out) + " left out; --case selects others",
                        2);
    if (told.is_cut)
        text += "  of long cases the first " + count_text(told.most_samples) + " samples were looked at\n";
    return text + "\n";
}

std::string cases_text(const Prediction& prediction, const std::optional<WireOfPrediction>& wire,
                       const TextStyle& style) {
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
    if (wire) {
        text += "  on the wire: " + std::to_string(wire->baud) + " baud, blocks of " +
                std::to_string(wire->block_samples) + " samples, busier direction\n";
    } else {
        text += "  with --rig RIG the time on the wire is told\n";
    }
    return text;
}

}  // namespace

std::string prediction_text(const Prediction& prediction, const std::optional<WireOfPrediction>& wire,
                            const TextStyle& style) {
    const Signal& signal = prediction.signal;
    std::string text = printable(prediction.title) + " (" + printable(prediction.plan_file) + "), on paper\n";
    text += "signal   " + rounded_text(signal.rate_hz, 6) + " Hz, " + text_of(signal.input) + " in, " +
            text_of(signal.output) + " out";
    text += signal.channels > 1 ? ", " + std::to_string(signal.channels) + " channels\n" : "\n";
    for (const PredictedFilter& filter : prediction.filters) {
        const std::string channels = prediction.filters.size() > 1 ? channels_text(filter.channels) + ": " : "";
        if (filter.arithmetic) text += assumed_text(*filter.arithmetic, signal, channels, style);
    }
    if (prediction.filters.empty()) text += "filter   unknown: nothing is told of it on paper\n";
    for (const PredictedFilter& filter : prediction.filters) text += filter_text(filter, signal, style);
    if (prediction.sight) text += sight_text(*prediction.sight, signal, style);
    return text + cases_text(prediction, wire, style);
}

}  // namespace halflsb
