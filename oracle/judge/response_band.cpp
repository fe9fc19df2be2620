#include "oracle/judge/response_band.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>

#include "oracle/measure/decibels.hpp"
#include "oracle/measure/repeated_looks.hpp"
#include "oracle/measure/response_estimate.hpp"

namespace halflsb {
/// Of one point, what the rule limits.
struct BandDecision::Gain {
    std::complex<double> design;
    ResponseEstimate difference;
    double scale;  ///< of the limits: the design's own gain, where they are relative to it

    double value_db() const { return db_of_amplitude(std::abs(design + difference.value) / scale); }
    double uncertainty_db() const {
        return db_per_neper * std::sqrt(difference.variance) / std::abs(design + difference.value);
    }
    double surely_below_db(double probability) const {
        return db_of_amplitude(gain_surely_below(design, difference, probability) / scale);
    }
    double surely_above_db(double probability) const {
        return db_of_amplitude(gain_surely_above(design, difference, probability) / scale);
    }
};

BandDecision::BandDecision(const ResponseRule& rule, std::string name, std::vector<BandPoint> points,
                           const std::vector<MaskLimits>& limits)
    : name_(std::move(name)),
      zone_db_(rule.delta_db),
      relative_to_design_(rule.relative_to_design),
      points_(std::move(points)) {
    Side least{{}, true, {}}, most{{}, false, {}};
    for (const MaskLimits& at : limits) {
        least.limits_db.push_back(at.min_db);
        most.limits_db.push_back(at.max_db);
    }
    for (Side* side : {&least, &most}) {
        bool has_some = false;
        for (const double limit : side->limits_db) {
            side->verdicts.push_back(std::isfinite(limit) ? Verdict::undecided : Verdict::pass);
            has_some = has_some || std::isfinite(limit);
        }
        if (has_some) sides_.push_back(std::move(*side));
    }
}

BandDecision::BandDecision(const ResponseRule& rule, const ResponseBand& band, std::vector<BandPoint> points)
    : BandDecision(
          rule, "from " + hz_text(band.from_hz) + " to " + hz_text(band.to_hz), points,
          std::vector<MaskLimits>(points.size(), {band.min_db.value_or(-HUGE_VAL), band.max_db.value_or(HUGE_VAL)})) {
    band_ = band;
}

namespace {

std::vector<BandPoint> limited(const ResponseMask& mask, const std::vector<BandPoint>& points) {
    std::vector<BandPoint> kept;
    for (const BandPoint& point : points) {
        const MaskLimits limits = mask.limits_at(point.hz);
        if (std::isfinite(limits.min_db) || std::isfinite(limits.max_db)) kept.push_back(point);
    }
    return kept;
}

std::vector<MaskLimits> limits_of(const ResponseMask& mask, const std::vector<BandPoint>& points) {
    std::vector<MaskLimits> limits;
    for (const BandPoint& point : points) limits.push_back(mask.limits_at(point.hz));
    return limits;
}

}  // namespace

BandDecision::BandDecision(const ResponseRule& rule, const ResponseMask& mask, std::vector<BandPoint> points)
    : BandDecision(rule, "in the mask " + mask.name, limited(mask, points), limits_of(mask, limited(mask, points))) {}

std::size_t BandDecision::decisions() const {
    std::size_t count = 0;
    for (const Side& side : sides_) {
        count += static_cast<std::size_t>(std::count_if(side.limits_db.begin(), side.limits_db.end(),
                                                        [](double limit) { return std::isfinite(limit); }));
    }
    return count;
}

MaskLimits BandDecision::limits_at(std::size_t point) const {
    MaskLimits limits{-HUGE_VAL, HUGE_VAL};
    for (const Side& side : sides_) (side.at_least ? limits.min_db : limits.max_db) = side.limits_db[point];
    return limits;
}

BandDecision::Gain BandDecision::gain_at(const ResponseSums& sums, const BandPoint& point) const {
    return {point.design, surest_estimate(sums, point.index), relative_to_design_ ? std::abs(point.design) : 1.0};
}

std::vector<BandDecision::Gain> BandDecision::gains(const ResponseSums& sums) const {
    std::vector<Gain> gains;
    for (const BandPoint& point : points_) gains.push_back(gain_at(sums, point));
    return gains;
}

void BandDecision::look(const ResponseSums& sums, const ErrorShares& shares) {
    for (std::size_t i = 0; i < points_.size(); ++i) {
        const auto is_open = [i](const Side& side) { return side.verdicts[i] == Verdict::undecided; };
        if (std::none_of(sides_.begin(), sides_.end(), is_open)) continue;
        const Gain gain = gain_at(sums, points_[i]);
        for (Side& side : sides_) {
            if (!is_open(side)) continue;
            // Rounded before it is compared, as all that is judged. What is not a number decides nothing.
            const double limit = judged(side.limits_db[i]);
            if (side.at_least) {
                if (judged(gain.surely_below_db(shares.alpha)) < limit)
                    side.verdicts[i] = Verdict::fail;
                else if (judged(gain.surely_above_db(shares.beta)) >= judged(side.limits_db[i] - zone_db_))
                    side.verdicts[i] = Verdict::pass;
            } else {
                if (judged(gain.surely_above_db(shares.alpha)) > limit)
                    side.verdicts[i] = Verdict::fail;
                else if (judged(gain.surely_below_db(shares.beta)) <= judged(side.limits_db[i] + zone_db_))
                    side.verdicts[i] = Verdict::pass;
            }
        }
    }
}

Verdict BandDecision::verdict() const {
    Verdict worst = Verdict::pass;
    for (const Side& side : sides_) {
        for (const Verdict verdict : side.verdicts) worst = std::max(worst, verdict);
    }
    return worst;
}

double BandDecision::room_of(const Side& side, std::size_t point, const Gain& gain) {
    const double value = judged(gain.value_db()), limit = judged(side.limits_db[point]);
    return side.at_least ? value - limit : limit - value;
}

std::size_t BandDecision::decisive(const Side& side, const std::vector<Gain>& gains) const {
    std::size_t shown = points_.size();
    double shown_room = 0.0;
    for (std::size_t i = 0; i < points_.size(); ++i) {
        if (!std::isfinite(side.limits_db[i])) continue;
        const double room = room_of(side, i, gains[i]);
        // A NaN has no room at all, and must not hide behind a comparison that is false.
        const bool tighter = !(room >= shown_room) && !std::isnan(shown_room);
        const Verdict verdict = side.verdicts[i];
        const Verdict before = shown < points_.size() ? side.verdicts[shown] : verdict;
        if (shown < points_.size() && !(verdict > before || (verdict == before && tighter))) continue;
        shown = i;
        shown_room = room;
    }
    return shown;
}

JudgedFigure BandDecision::figure_of(const Side& side, const std::vector<Gain>& gains) const {
    const std::size_t shown = decisive(side, gains);
    const double limit = judged(side.limits_db[shown]);
    JudgedFigure figure;
    figure.name = std::string(side.at_least ? "lowest" : "highest") + " gain " + name_;
    figure.limit = limit;
    figure.unit = "dB";
    figure.at_least = side.at_least;
    figure.verdict = side.verdicts[shown];
    figure.note = "at " + hz_text(points_[shown].hz);
    const double value = judged(gains[shown].value_db());
    if (std::isfinite(value)) {
        figure.value = value;
        figure.margin = judged(room_of(side, shown, gains[shown]));
        const double uncertainty = judged(gains[shown].uncertainty_db());
        if (std::isfinite(uncertainty)) figure.uncertainty = uncertainty;
        if (figure.verdict == Verdict::pass && *figure.margin < 0.0) figure.note += ", in the zone";
    } else {
        figure.note += std::isnan(value) ? ", the response is not a number" : ", no output there";
    }
    return figure;
}

std::vector<JudgedFigure> BandDecision::figures(const ResponseSums& sums) const {
    const std::vector<Gain> measured = gains(sums);
    std::vector<JudgedFigure> figures;
    for (const Side& side : sides_) figures.push_back(figure_of(side, measured));
    return figures;
}

std::vector<std::pair<double, Verdict>> BandDecision::decisive_points(const ResponseSums& sums) const {
    const std::vector<Gain> measured = gains(sums);
    std::vector<std::pair<double, Verdict>> points;
    for (const Side& side : sides_) {
        const std::size_t shown = decisive(side, measured);
        points.emplace_back(points_[shown].hz, side.verdicts[shown]);
    }
    return points;
}

double BandDecision::samples_to_tell(const Side& side, std::size_t point, const Gain& gain, double samples,
                                     const ErrorShares& shares) const {
    const double deviation = std::sqrt(gain.difference.variance);
    if (!std::isfinite(deviation) || !std::isfinite(side.limits_db[point])) return 0.0;
    // From the limit to the end of the zone, as a factor.
    const double limit = amplitude_of_db(side.limits_db[point]) * gain.scale;
    const double delta = limit * std::fabs(amplitude_of_db(side.at_least ? -zone_db_ : zone_db_) - 1.0);
    return halflsb::fixed_length_samples(shares.alpha, shares.beta, delta, deviation, samples);
}

double BandDecision::fixed_length_samples(const ResponseSums& sums, double samples, const ErrorShares& shares) const {
    double most = 0.0;
    for (std::size_t i = 0; i < points_.size(); ++i) {
        const Gain gain = gain_at(sums, points_[i]);
        for (const Side& side : sides_) most = std::max(most, samples_to_tell(side, i, gain, samples, shares));
    }
    return most;
}

BandDecision::Open BandDecision::open(const ResponseSums& sums, double samples, const ErrorShares& shares) const {
    Open open;
    for (std::size_t i = 0; i < points_.size(); ++i) {
        const Gain gain = gain_at(sums, points_[i]);
        for (const Side& side : sides_) {
            if (side.verdicts[i] != Verdict::undecided) continue;
            ++open.gains;
            open.is_not_a_number = open.is_not_a_number || std::isnan(gain.value_db());
            open.samples_needed = std::max(open.samples_needed, samples_to_tell(side, i, gain, samples, shares));
        }
    }
    return open;
}

std::string hz_text(double hz) {
    char text[32];
    const auto end = std::to_chars(text, text + sizeof text, hz, std::chars_format::general, 6).ptr;
    return std::string(text, end) + " Hz";
}

}  // namespace halflsb
