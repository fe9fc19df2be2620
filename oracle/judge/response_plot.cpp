#include "oracle/judge/response_plot.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <numbers>
#include <set>

#include "oracle/judge/units.hpp"
#include "oracle/measure/response_estimate.hpp"

namespace halflsb {
namespace {

/// The lowest ones are all kept: a logarithmic axis gives them room.
constexpr std::size_t points_kept = 128, most_buckets = 140;
constexpr std::size_t most_marks = 12;
constexpr double degrees_of_radian = 180.0 / std::numbers::pi;

/// No gain at all stands far below whatever can be measured; NaN stays.
double db_of(double ratio) { return std::max(20.0 * std::log10(ratio), -400.0); }

struct PointFigures {
    double hz, gain_db, low_db, high_db, design_db;
    double phase, low_phase, high_phase, design_phase;  ///< degrees
};

PointFigures figures_of(const ResponseSums& sums, const BandPoint& point, bool relative, double confidence) {
    const ResponseEstimate estimate = surest_estimate(sums, point.index);
    const double scale = relative ? std::abs(point.design) : 1.0;
    const Interval gain = gain_interval(point.design, estimate, confidence);
    PointFigures figures{point.hz,
                         db_of(std::abs(point.design + estimate.value) / scale),
                         db_of(gain.low / scale),
                         db_of(gain.high / scale),
                         db_of(std::abs(point.design) / scale),
                         NAN,
                         NAN,
                         NAN,
                         NAN};
    if (std::abs(point.design) == 0.0) return figures;
    figures.design_phase = std::arg(point.design) * degrees_of_radian;
    const Interval turned = phase_interval(point.design, estimate, confidence);
    // The whole circle: the phase is anything, so there is none to show.
    if (!(turned.high - turned.low < 2.0 * std::numbers::pi * 0.999)) return figures;
    figures.phase = figures.design_phase + std::arg(1.0 + estimate.value / point.design) * degrees_of_radian;
    figures.low_phase = figures.design_phase + turned.low * degrees_of_radian;
    figures.high_phase = figures.design_phase + turned.high * degrees_of_radian;
    return figures;
}

/// The extremes of each bucket stay: of the gain, and of its distance from the design.
std::vector<PointFigures> thinned(const std::vector<PointFigures>& all) {
    if (all.size() <= points_kept + most_buckets) return all;
    std::vector<PointFigures> kept(all.begin(), all.begin() + points_kept);
    const std::size_t rest = all.size() - points_kept;
    for (std::size_t bucket = 0; bucket < most_buckets; ++bucket) {
        const std::size_t begin = points_kept + bucket * rest / most_buckets;
        const std::size_t end = points_kept + (bucket + 1) * rest / most_buckets;
        std::array<std::size_t, 4> extreme{begin, begin, begin, begin};
        const auto off = [&](std::size_t i) { return all[i].gain_db - all[i].design_db; };
        for (std::size_t i = begin; i < end; ++i) {
            if (all[i].gain_db < all[extreme[0]].gain_db) extreme[0] = i;
            if (all[i].gain_db > all[extreme[1]].gain_db) extreme[1] = i;
            if (off(i) < off(extreme[2])) extreme[2] = i;
            if (off(i) > off(extreme[3])) extreme[3] = i;
        }
        for (const std::size_t i : std::set<std::size_t>(extreme.begin(), extreme.end())) kept.push_back(all[i]);
    }
    return kept;
}

std::string note_of(const ResponseRule& rule, bool is_thinned, double confidence) {
    std::string note =
        "Band around the curve: " + brief(100.0 * confidence) +
        " % confidence, each frequency by itself; the verdict holds to the plan's alpha and beta instead.";
    note += " The zone beyond each limit is " + brief(rule.delta_db) + " dB.";
    if (is_thinned)
        note +=
            " Thinned: of neighbouring frequencies the lowest and the highest gains stay, and the furthest from the "
            "design.";
    return note + " The latency is taken off the phase; it is not shown where the gain is not clear of its spread.";
}

/// Each piece with the widest limits in it.
void add_mask(const BandDecision& band, std::vector<PlotLimit>& limits) {
    constexpr std::size_t most_pieces = 128;
    const std::vector<BandPoint>& points = band.points();
    if (points.empty()) return;
    const std::size_t step = (points.size() + most_pieces - 1) / most_pieces;
    for (std::size_t begin = 0; begin < points.size(); begin += step) {
        const std::size_t end = std::min(begin + step, points.size() - 1);
        MaskLimits widest = band.limits_at(begin);
        for (std::size_t i = begin; i < std::min(begin + step, points.size()); ++i) {
            widest.min_db = std::min(widest.min_db, band.limits_at(i).min_db);
            widest.max_db = std::max(widest.max_db, band.limits_at(i).max_db);
        }
        const auto told = [](double limit) { return std::isfinite(limit) ? std::optional(limit) : std::nullopt; };
        limits.push_back({points[begin].hz, points[end].hz, told(widest.min_db), told(widest.max_db), band.verdict()});
    }
}

/// Limits around the design are drawn around 0, and the phase off the design with them.
void add_phase_limit(const PhaseDecisions& phases, PlotPanel& panel) {
    const double limit = *phases.limits().max_phase_deg;
    if (phases.limits().relative_to_design) {
        panel.quantity = "phase, relative to the design";
        PlotCurve &design = panel.curves[0], &measured = panel.curves[1];
        for (std::size_t i = 0; i < design.values.size(); ++i) {
            measured.values[i] -= design.values[i];
            measured.low[i] -= design.values[i];
            measured.high[i] -= design.values[i];
            design.values[i] -= design.values[i];
        }
    }
    panel.limits.push_back({phases.from_hz(), phases.to_hz(), -limit, limit, phases.phase_verdict()});
}

/// Its mean over each step stands at all frequencies of the step.
PlotPanel delay_panel(const PhaseDecisions& phases, const ResponseSums& sums, const std::vector<double>& x,
                      double confidence) {
    const PhaseLimits& asked = phases.limits();
    const std::vector<PhaseDecisions::Step> steps = phases.steps(sums, confidence);
    using Role = PlotCurve::Role;
    PlotCurve design{Role::reference, "design", {}, {}, {}}, measured{Role::response, "response", {}, {}, {}};
    const auto finite = [](double value) { return std::isfinite(value) ? value : NAN; };
    for (const double hz : x) {
        const auto step = std::find_if(steps.begin(), steps.end(),
                                       [&](const auto& each) { return hz >= each.from_hz && hz <= each.to_hz; });
        const bool has = step != steps.end();
        design.values.push_back(has ? step->design : NAN);
        measured.values.push_back(has ? finite(step->value) : NAN);
        measured.low.push_back(has ? finite(step->low) : NAN);
        measured.high.push_back(has ? finite(step->high) : NAN);
    }
    PlotPanel panel{asked.relative_to_design ? "group delay, relative to the design" : "group delay",
                    "samples",
                    {std::move(design), std::move(measured)}};
    for (const PhaseDecisions::Step& step : steps) {
        const auto least = asked.relative_to_design && asked.max_group_delay_samples
                               ? std::optional(-*asked.max_group_delay_samples)
                               : asked.min_group_delay_samples;
        panel.limits.push_back({step.from_hz, step.to_hz, least, asked.max_group_delay_samples, step.verdict});
    }
    return panel;
}

}  // namespace

Plot response_plot(const ResponseRule& rule, const std::vector<BandPoint>& points,
                   const std::vector<BandDecision>& bands, const PhaseDecisions& phases, const ResponseSums& sums,
                   double confidence) {
    std::vector<PointFigures> all;
    for (const BandPoint& point : points) all.push_back(figures_of(sums, point, rule.relative_to_design, confidence));
    const std::vector<PointFigures> shown = thinned(all);

    Plot plot;
    plot.title = "gain and phase";
    plot.note = note_of(rule, shown.size() < all.size(), confidence);
    plot.over = Plot::Over::frequency;
    using Role = PlotCurve::Role;
    PlotCurve gain{Role::response, "response", {}, {}, {}}, gain_design{Role::reference, "design", {}, {}, {}};
    PlotCurve phase = gain, phase_design = gain_design;
    for (const PointFigures& point : shown) {
        plot.x.push_back(point.hz);
        gain.values.push_back(point.gain_db);
        gain.low.push_back(point.low_db);
        gain.high.push_back(point.high_db);
        gain_design.values.push_back(point.design_db);
        phase.values.push_back(point.phase);
        phase.low.push_back(point.low_phase);
        phase.high.push_back(point.high_phase);
        phase_design.values.push_back(point.design_phase);
    }
    PlotPanel gains{rule.relative_to_design ? "gain, relative to the design" : "gain",
                    "dB",
                    {std::move(gain_design), std::move(gain)}};
    for (const BandDecision& band : bands) {
        if (const auto& asked = band.band()) {
            gains.limits.push_back({asked->from_hz, asked->to_hz, asked->min_db, asked->max_db, band.verdict()});
        } else {
            add_mask(band, gains.limits);
        }
        for (const auto& [hz, verdict] : band.decisive_points(sums)) {
            if (verdict != Verdict::pass && plot.marks.size() < most_marks)
                plot.marks.push_back(
                    {hz, (verdict == Verdict::fail ? "fails at " : "undecided at ") + hz_text(hz), verdict});
        }
    }
    plot.panels.push_back(std::move(gains));
    PlotPanel angles{"phase", "degrees", {std::move(phase_design), std::move(phase)}, {}, true};
    if (phases.limits_phase()) add_phase_limit(phases, angles);
    plot.panels.push_back(std::move(angles));
    if (phases.limits().limits_delay()) plot.panels.push_back(delay_panel(phases, sums, plot.x, confidence));
    return plot;
}

}  // namespace halflsb
