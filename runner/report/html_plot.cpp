#include "runner/report/html_plot.hpp"

#include "runner/report/html_text.hpp"

namespace halflsb {
namespace {

/// A pixel is a thousandth of a plot, and a table of values shows no more.
constexpr int value_digits = 6;
constexpr int axis_digits = 9;

std::string numbers(const std::vector<double>& values, int digits) {
    std::string out = "[";
    for (std::size_t i = 0; i < values.size(); ++i) out += (i > 0 ? "," : "") + script_number(values[i], digits);
    return out + "]";
}

std::string end_number(const std::optional<double>& end) { return end ? script_number(*end, axis_digits) : "null"; }

std::string_view word_of(PlotCurve::Role role) {
    switch (role) {
        case PlotCurve::Role::stimulus:
            return "stimulus";
        case PlotCurve::Role::reference:
            return "reference";
        case PlotCurve::Role::error:
            return "error";
        case PlotCurve::Role::response:
            break;
    }
    return "response";
}

std::string curve_data(const PlotCurve& curve) {
    std::string out = "{\"role\":" + script_string(word_of(curve.role)) + ",\"name\":" + script_string(curve.name) +
                      ",\"y\":" + numbers(curve.values, value_digits);
    if (!curve.low.empty())
        out += ",\"low\":" + numbers(curve.low, value_digits) + ",\"high\":" + numbers(curve.high, value_digits);
    return out + "}";
}

std::string limit_data(const PlotLimit& limit) {
    return "{\"from\":" + script_number(limit.from, axis_digits) + ",\"to\":" + script_number(limit.to, axis_digits) +
           ",\"min\":" + end_number(limit.min) + ",\"max\":" + end_number(limit.max) +
           ",\"verdict\":" + script_string(name_of(limit.verdict)) + "}";
}

template <class Items, class Text>
std::string list(const Items& items, Text text) {
    std::string out = "[";
    for (const auto& item : items) out += (out.size() > 1 ? "," : "") + text(item);
    return out + "]";
}

std::string panel_data(const PlotPanel& panel) {
    return "{\"quantity\":" + script_string(panel.quantity) + ",\"unit\":" + script_string(panel.unit) +
           ",\"is_angle\":" + (panel.is_angle ? "true" : "false") + ",\"curves\":" + list(panel.curves, curve_data) +
           ",\"limits\":" + list(panel.limits, limit_data) + "}";
}

std::string mark_data(const PlotMark& mark) {
    return "{\"x\":" + script_number(mark.x, axis_digits) + ",\"text\":" + script_string(mark.text) +
           ",\"verdict\":" + script_string(name_of(mark.verdict)) + "}";
}

}  // namespace

std::string plot_figure(const Plot& plot, std::size_t number) {
    const bool is_time = plot.over == Plot::Over::time;
    std::string title = plot.title;
    if (plot.channel > 0) title += ", channel " + std::to_string(plot.channel);
    std::string out = "<figure class=\"plot\" id=\"plot-" + std::to_string(number) + "\">\n";
    out += html_element("figcaption", "", title) + "\n<div class=\"panels\"></div>\n";
    if (!plot.note.empty()) out += html_element("p", "note", plot.note) + "\n";
    out += "<script type=\"application/json\">{\"over\":" + script_string(is_time ? "time" : "frequency") +
           ",\"rate_hz\":" + script_number(plot.rate_hz, 17) + ",\"x\":" + numbers(plot.x, axis_digits) +
           ",\"panels\":" + list(plot.panels, panel_data) + ",\"marks\":" + list(plot.marks, mark_data) +
           "}</script>\n";
    return out + "</figure>\n";
}

}  // namespace halflsb
