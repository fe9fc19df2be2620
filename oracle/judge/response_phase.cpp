#include "oracle/judge/response_phase.hpp"

#include <algorithm>
#include <cmath>
#include <numbers>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/case_rates.hpp"
#include "oracle/measure/quantile.hpp"
#include "oracle/measure/repeated_looks.hpp"

namespace halflsb {
namespace {

using Complex = std::complex<double>;

constexpr double degrees_of_radian = 180.0 / std::numbers::pi;
constexpr double turn = 2.0 * std::numbers::pi;
/// A main lobe of the Hann window.
constexpr std::size_t fewest_bins_a_step = 4, steps_wanted = 16;

/// How far the response is turned from the design, with its deviation and degrees.
struct Turned {
    double radians, deviation, degrees;
};

Turned turned_at(const BandPoint& point, const ResponseSums& sums) {
    const ResponseEstimate difference = surest_estimate(sums, point.index);
    const Complex response = point.design + difference.value;
    return {std::arg(response * std::conj(point.design)), std::sqrt(difference.variance) / std::abs(response),
            difference.degrees};
}

/// Within +-180.
double wrapped_deg(double degrees) { return std::remainder(degrees, 360.0); }

/// Of the design over a step, in radians: on a path of pieces that each turn by less than half a turn, as the delay of
/// a filter is far below `pieces` / step.
double design_turn(const FilterChain& chain, double from, double to) {
    constexpr int pieces = 256;
    double sum = 0.0;
    Complex before = response_at(chain, from);
    for (int i = 1; i <= pieces; ++i) {
        const Complex here = response_at(chain, from + (to - from) * i / pieces);
        sum += std::arg(here * std::conj(before));
        before = here;
    }
    return sum;
}

}  // namespace

double PhaseFigure::reach(double probability) const {
    const double t = student_quantile_above(probability, degrees);
    if (!(t * ratio < 0.5)) return HUGE_VAL;
    // asin x / x grows: that of the larger ratio holds for both ends of a step.
    const double bent = ratio > 0.0 ? std::asin(t * ratio) / (t * ratio) : 1.0;
    return t * uncertainty * bent;
}

std::vector<BandPoint> phase_points(const PhaseLimits& limits, const std::vector<BandPoint>& points, double rate_hz) {
    double highest = 0.0;
    for (const BandPoint& point : points) highest = std::max(highest, std::abs(point.design));
    const double least = highest * std::pow(10.0, -limits.passband_db / 20.0);
    std::vector<BandPoint> inside;
    for (const BandPoint& point : points) {
        // At 0 and at Nyquist a response is real: it has a sign and no phase.
        if (point.hz <= 0.0 || point.hz >= rate_hz / 2.0 * (1.0 - 1e-12) || std::abs(point.design) == 0.0) continue;
        const bool is_in =
            limits.from_hz ? point.hz >= *limits.from_hz && point.hz <= *limits.to_hz : std::abs(point.design) >= least;
        if (is_in) inside.push_back(point);
    }
    return inside;
}

PhaseDecisions::PhaseDecisions(const PhaseLimits& limits, const std::vector<BandPoint>& points,
                               const ResponseSums& sums, const JudgedChannel& channel)
    : limits_(limits), rate_hz_(returned_rate_hz(channel.plan, channel.the_case)) {
    if (!limits.any()) return;
    const std::vector<BandPoint> inside = phase_points(limits, points, rate_hz_);
    if (limits.max_phase_deg) {
        phase_sides_.push_back({*limits.max_phase_deg, limits.delta_deg, false, true});
        for (const BandPoint& point : inside) {
            const double own = limits.relative_to_design ? 0.0 : std::arg(point.design) * degrees_of_radian;
            phases_.push_back({point, point, own, {Verdict::undecided}});
        }
    }
    if (limits.min_group_delay_samples)
        delay_sides_.push_back({*limits.min_group_delay_samples, limits.delta_samples, true, false});
    if (limits.max_group_delay_samples) {
        delay_sides_.push_back(
            {*limits.max_group_delay_samples, limits.delta_samples, false, limits.relative_to_design});
    }
    if (limits.limits_delay()) add_steps(inside, sums, channel);
}

void PhaseDecisions::add_steps(const std::vector<BandPoint>& inside, const ResponseSums& sums,
                               const JudgedChannel& channel) {
    if (inside.size() < 2) return;
    const FilterChain chain = chain_of(channel.plan, channel.the_case, channel.channel);
    const double of_sent = returned_per_sent(channel.plan, channel.the_case);
    // Tones are far enough apart as they are.
    const std::size_t fewest = sums.smoothing_bins2 > 0.0 ? fewest_bins_a_step : 1;
    const std::size_t step = std::max(fewest, (inside.size() - 1) / steps_wanted);
    for (std::size_t i = 0; i + step < inside.size(); i += step) {
        const BandPoint &a = inside[i], &b = inside[i + step];
        double design = 0.0;
        if (!limits_.relative_to_design) {
            const double from = a.hz / rate_hz_, to = b.hz / rate_hz_;
            design = -design_turn(chain, from * of_sent, to * of_sent) / (turn * (to - from));
        }
        delays_.push_back({a, b, design, std::vector<Verdict>(delay_sides_.size(), Verdict::undecided)});
    }
}

PhaseFigure PhaseDecisions::phase_of(const Item& item, const ResponseSums& sums) const {
    const Turned at = turned_at(item.a, sums);
    return {wrapped_deg(item.design + at.radians * degrees_of_radian), at.deviation * degrees_of_radian, at.degrees,
            at.deviation};
}

PhaseFigure PhaseDecisions::delay_of(const Item& item, const ResponseSums& sums) const {
    const Turned a = turned_at(item.a, sums), b = turned_at(item.b, sums);
    const double width = turn * (item.b.hz - item.a.hz) / rate_hz_;
    return {item.design - std::remainder(b.radians - a.radians, turn) / width,
            std::hypot(a.deviation, b.deviation) / width, std::min(a.degrees, b.degrees),
            std::max(a.deviation, b.deviation)};
}

/// use(items, sides, is_delay)
template <class Use>
void PhaseDecisions::each(Use use) const {
    use(phases_, phase_sides_, false);
    use(delays_, delay_sides_, true);
}

std::size_t PhaseDecisions::decisions() const {
    return phases_.size() * phase_sides_.size() + delays_.size() * delay_sides_.size();
}

void PhaseDecisions::look(const ResponseSums& sums, const ErrorShares& shares) {
    const auto look_at = [&](std::vector<Item>& items, const std::vector<Side>& sides, bool is_delay) {
        for (Item& item : items) {
            if (std::count(item.verdicts.begin(), item.verdicts.end(), Verdict::undecided) == 0) continue;
            const PhaseFigure figure = figure_of(item, is_delay, sums);
            for (std::size_t s = 0; s < sides.size(); ++s) {
                if (item.verdicts[s] != Verdict::undecided) continue;
                const Side& side = sides[s];
                // Two ends share alpha where the size is held: a limit near 0 could be left on either.
                const double fails = judged(figure.reach(side.of_size ? shares.alpha / 2.0 : shares.alpha));
                const double value = judged(side.of_size ? std::fabs(figure.value) : figure.value);
                const double beyond = judged(side.at_least ? side.limit - value : value - side.limit);
                if (beyond - fails > 0.0) {
                    item.verdicts[s] = Verdict::fail;
                } else if (beyond + judged(figure.reach(shares.beta)) <= side.zone) {
                    item.verdicts[s] = Verdict::pass;
                }
            }
        }
    };
    look_at(phases_, phase_sides_, false);
    look_at(delays_, delay_sides_, true);
}

Verdict PhaseDecisions::phase_verdict() const {
    Verdict worst = Verdict::pass;
    for (const Item& item : phases_) worst = std::max(worst, item.verdicts.front());
    return worst;
}

Verdict PhaseDecisions::verdict() const {
    Verdict worst = phase_verdict();
    for (const Item& item : delays_) {
        for (const Verdict verdict : item.verdicts) worst = std::max(worst, verdict);
    }
    return worst;
}

double PhaseDecisions::from_hz() const { return phases_.empty() ? 0.0 : phases_.front().a.hz; }
double PhaseDecisions::to_hz() const { return phases_.empty() ? 0.0 : phases_.back().a.hz; }

JudgedFigure PhaseDecisions::shown(const std::vector<Item>& items, std::size_t s, const std::vector<Side>& sides,
                                   bool is_delay, const ResponseSums& sums) const {
    const Side& side = sides[s];
    const Item* decisive = nullptr;
    PhaseFigure decisive_figure;
    double most_beyond = 0.0;
    for (const Item& item : items) {
        const PhaseFigure figure = figure_of(item, is_delay, sums);
        const double value = side.of_size ? std::fabs(figure.value) : figure.value;
        const double beyond = side.at_least ? side.limit - value : value - side.limit;
        // A NaN is beyond all.
        const bool further = !(beyond <= most_beyond) && !std::isnan(most_beyond);
        if (decisive != nullptr &&
            !(item.verdicts[s] > decisive->verdicts[s] || (item.verdicts[s] == decisive->verdicts[s] && further)))
            continue;
        decisive = &item;
        decisive_figure = figure;
        most_beyond = beyond;
    }
    JudgedFigure figure;
    const std::string quantity = is_delay ? "group delay" : "phase";
    figure.name = side.of_size ? "largest " + quantity + (limits_.relative_to_design ? " off the design" : "")
                               : (side.at_least ? "lowest " : "highest ") + quantity;
    figure.limit = judged(side.limit);
    figure.unit = is_delay ? "samples" : "degrees";
    figure.at_least = side.at_least;
    figure.verdict = decisive->verdicts[s];
    figure.note = is_delay ? "mean from " + hz_text(decisive->a.hz) + " to " + hz_text(decisive->b.hz)
                           : "at " + hz_text(decisive->a.hz);
    if (!std::isfinite(decisive_figure.value)) {
        figure.note += ", the response is not a number";
        return figure;
    }
    figure.value = judged(side.of_size ? std::fabs(decisive_figure.value) : decisive_figure.value);
    figure.margin = judged(side.at_least ? *figure.value - *figure.limit : *figure.limit - *figure.value);
    if (std::isfinite(decisive_figure.uncertainty)) figure.uncertainty = judged(decisive_figure.uncertainty);
    if (figure.verdict == Verdict::pass && *figure.margin < 0.0) figure.note += ", in the zone";
    return figure;
}

std::vector<JudgedFigure> PhaseDecisions::figures(const ResponseSums& sums) const {
    std::vector<JudgedFigure> figures;
    each([&](const std::vector<Item>& items, const std::vector<Side>& sides, bool is_delay) {
        if (items.empty()) return;
        for (std::size_t s = 0; s < sides.size(); ++s) figures.push_back(shown(items, s, sides, is_delay, sums));
    });
    return figures;
}

PhaseDecisions::Open PhaseDecisions::open(const ResponseSums& sums, double samples, const ErrorShares& shares) const {
    Open open;
    each([&](const std::vector<Item>& items, const std::vector<Side>& sides, bool is_delay) {
        for (const Item& item : items) {
            const auto undecided = std::count(item.verdicts.begin(), item.verdicts.end(), Verdict::undecided);
            if (undecided == 0) continue;
            open.figures += static_cast<std::size_t>(undecided);
            const PhaseFigure figure = figure_of(item, is_delay, sums);
            open.is_not_a_number = open.is_not_a_number || std::isnan(figure.value);
            if (!std::isfinite(figure.uncertainty)) continue;
            open.samples_needed = std::max(open.samples_needed,
                                           halflsb::fixed_length_samples(shares.alpha, shares.beta, sides.front().zone,
                                                                         figure.uncertainty, samples));
        }
    });
    return open;
}

double PhaseDecisions::fixed_length_samples(const ResponseSums& sums, double samples, const ErrorShares& shares) const {
    double most = 0.0;
    each([&](const std::vector<Item>& items, const std::vector<Side>& sides, bool is_delay) {
        for (const Item& item : items) {
            const double deviation = figure_of(item, is_delay, sums).uncertainty;
            if (!std::isfinite(deviation)) continue;
            most = std::max(
                most, halflsb::fixed_length_samples(shares.alpha, shares.beta, sides.front().zone, deviation, samples));
        }
    });
    return most;
}

std::vector<PhaseDecisions::Step> PhaseDecisions::steps(const ResponseSums& sums, double confidence) const {
    std::vector<Step> steps;
    for (const Item& item : delays_) {
        const PhaseFigure figure = delay_of(item, sums);
        const double reach = figure.reach((1.0 - confidence) / 2.0);
        steps.push_back({item.a.hz, item.b.hz, figure.value, figure.value - reach, figure.value + reach, item.design,
                         *std::max_element(item.verdicts.begin(), item.verdicts.end())});
    }
    return steps;
}

}  // namespace halflsb
