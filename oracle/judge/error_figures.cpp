#include "oracle/judge/error_figures.hpp"

#include <utility>

#include "oracle/judge/units.hpp"

namespace halflsb {

JudgedFigure at_most(std::string name, double value, double limit, std::string unit) {
    JudgedFigure figure{std::move(name), judged(value), judged(limit), std::nullopt,
                        std::move(unit), false,         Verdict::fail, {}};
    figure.verdict = pass_or_fail(*figure.value <= *figure.limit);
    figure.margin = judged(*figure.limit - *figure.value);
    return figure;
}

JudgedFigure within(std::string name, const ErrorEnds& found, const ErrorEnds& limits, std::string unit) {
    // + 0.0: no figure is -0.
    const double lowest = judged(found.lowest) + 0.0, highest = judged(found.highest) + 0.0;
    const double lower = judged(limits.lowest) + 0.0, upper = judged(limits.highest) + 0.0;
    const bool is_low = lowest - lower < upper - highest;
    JudgedFigure figure{std::move(name),        is_low ? lowest : highest,
                        is_low ? lower : upper, std::nullopt,
                        std::move(unit),        is_low,
                        Verdict::fail,          {}};
    figure.verdict = pass_or_fail(lowest >= lower && highest <= upper);
    figure.margin = judged(is_low ? lowest - lower : upper - highest);
    figure.note = "derived, " + brief(lower) + " .. " + brief(upper);
    return figure;
}

std::string exempt_text(std::int64_t exempt, const RailWatch* rails) {
    const auto from = rails == nullptr ? std::nullopt : rails->first_unsafe_index();
    if (!from) return "derived limits say nothing of " + std::to_string(exempt) + " samples";
    return "from sample " + std::to_string(*from) + " on " + rails->unsafe_node() +
           " may leave its word: derived limits say nothing of " + std::to_string(exempt) +
           (exempt == 1 ? " sample" : " samples") + ", only exact does";
}

}  // namespace halflsb
