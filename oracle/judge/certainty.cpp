#include "oracle/judge/certainty.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/judge/plan.hpp"
#include "oracle/measure/quantile.hpp"

namespace halflsb {
namespace {

double quantile(double probability, double degrees) {
    return std::isinf(degrees) ? normal_quantile_above(probability) : student_quantile_above(probability, degrees);
}

}  // namespace

bool is_uncertain(const Rule& rule) {
    if (const auto* latency = std::get_if<LatencyRule>(&rule.kind)) return latency->max_fraction_samples.has_value();
    if (const auto* crosstalk = std::get_if<CrosstalkRule>(&rule.kind)) return crosstalk->max_db.has_value();
    return std::visit([](const auto& kind) { return !kind.is_exact; }, rule.kind);
}

ErrorShares shares_of_rule(const Plan& plan) {
    std::size_t count = 0;
    for (const Case& the_case : plan.cases) {
        const auto in_case = std::count_if(the_case.rules.begin(), the_case.rules.end(), is_uncertain);
        count += static_cast<std::size_t>(in_case) * static_cast<std::size_t>(plan.signal.channels);
    }
    return ErrorShares{plan.certainty.alpha, plan.certainty.beta}.alpha_over(std::max<std::size_t>(count, 1));
}

JudgedFigure decided(std::string name, const Figure& measured, double degrees, const FigureLimit& limit,
                     std::string unit, const ErrorShares& shares) {
    JudgedFigure figure;
    figure.name = std::move(name);
    figure.limit = judged(limit.limit);
    figure.unit = std::move(unit);
    figure.at_least = limit.at_least;
    figure.verdict = Verdict::undecided;
    if (!std::isfinite(measured.value)) {
        figure.note = "not a finite number";
        return figure;
    }
    // How far within the limit; rounded before it is compared, like all that is judged.
    figure.value = judged(measured.value);
    figure.margin = judged(limit.at_least ? *figure.value - *figure.limit : *figure.limit - *figure.value);
    const double u = measured.standard_uncertainty;
    if (!std::isfinite(u) || u < 0.0 || !std::isfinite(measured.bound)) {
        figure.note = "how sure it is, is not known";
        return figure;
    }
    figure.uncertainty = judged(std::hypot(u, measured.bound / std::sqrt(3.0)));
    // 0 times an infinite quantile: what has no spread is known, whatever the degrees.
    const auto reach = [&](double probability) {
        return judged(measured.bound + (u > 0.0 ? u * quantile(probability, degrees) : 0.0));
    };
    if (*figure.margin + reach(shares.alpha) < 0.0) {
        figure.verdict = Verdict::fail;
    } else if (*figure.margin + limit.zone >= reach(shares.beta)) {
        figure.verdict = Verdict::pass;
    }
    return figure;
}

}  // namespace halflsb
