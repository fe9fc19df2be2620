#include "oracle/judge/response_band.hpp"

#include <algorithm>
#include <charconv>
#include <cmath>
#include <numbers>

#include "oracle/measure/repeated_looks.hpp"
#include "oracle/measure/response_estimate.hpp"

namespace halflsb {
namespace {

double ratio_of(double db) { return std::pow(10.0, db / 20.0); }
double db_of(double ratio) { return 20.0 * std::log10(ratio); }
/// d(20 lg x) = this dx / x.
constexpr double db_per_neper = 20.0 / std::numbers::ln10;

}  // namespace

/// Of one point, what the rule limits.
struct BandDecision::Gain {
    std::complex<double> design;
    ResponseEstimate difference;
    double scale;  ///< of the limits: the design's own gain, where they are relative to it

    double value_db() const { return db_of(std::abs(design + difference.value) / scale); }
    double uncertainty_db() const {
        return db_per_neper * std::sqrt(difference.variance) / std::abs(design + difference.value);
    }
    double surely_below_db(double probability) const {
        return db_of(gain_surely_below(design, difference, probability) / scale);
    }
    double surely_above_db(double probability) const {
        return db_of(gain_surely_above(design, difference, probability) / scale);
    }
};

BandDecision::BandDecision(const ResponseRule& rule, const ResponseBand& band, std::vector<BandPoint> points)
    : band_(band), zone_db_(rule.delta_db), relative_to_design_(rule.relative_to_design), points_(std::move(points)) {
    const std::vector<Verdict> open(points_.size(), Verdict::undecided);
    if (band.min_db) sides_.push_back({*band.min_db, true, open});
    if (band.max_db) sides_.push_back({*band.max_db, false, open});
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
            const double limit = judged(side.limit_db);
            if (side.at_least) {
                if (judged(gain.surely_below_db(shares.alpha)) < limit)
                    side.verdicts[i] = Verdict::fail;
                else if (judged(gain.surely_above_db(shares.beta)) >= judged(side.limit_db - zone_db_))
                    side.verdicts[i] = Verdict::pass;
            } else {
                if (judged(gain.surely_above_db(shares.alpha)) > limit)
                    side.verdicts[i] = Verdict::fail;
                else if (judged(gain.surely_below_db(shares.beta)) <= judged(side.limit_db + zone_db_))
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

double BandDecision::room_of(const Side& side, const Gain& gain) {
    const double value = judged(gain.value_db()), limit = judged(side.limit_db);
    return side.at_least ? value - limit : limit - value;
}

std::size_t BandDecision::decisive(const Side& side, const std::vector<Gain>& gains) const {
    std::size_t shown = 0;
    double shown_room = 0.0;
    for (std::size_t i = 0; i < points_.size(); ++i) {
        const double room = room_of(side, gains[i]);
        // A NaN has no room at all, and must not hide behind a comparison that is false.
        const bool tighter = !(room >= shown_room) && !std::isnan(shown_room);
        const Verdict verdict = side.verdicts[i], before = side.verdicts[shown];
        if (i > 0 && !(verdict > before || (verdict == before && tighter))) continue;
        shown = i;
        shown_room = room;
    }
    return shown;
}

JudgedFigure BandDecision::figure_of(const Side& side, const std::vector<Gain>& gains) const {
    const std::size_t shown = decisive(side, gains);
    const double limit = judged(side.limit_db);
    JudgedFigure figure;
    figure.name = std::string(side.at_least ? "lowest" : "highest") + " gain from " + hz_text(band_.from_hz) + " to " +
                  hz_text(band_.to_hz);
    figure.limit = limit;
    figure.unit = "dB";
    figure.at_least = side.at_least;
    figure.verdict = side.verdicts[shown];
    figure.note = "at " + hz_text(points_[shown].hz);
    const double value = judged(gains[shown].value_db());
    if (std::isfinite(value)) {
        figure.value = value;
        figure.margin = judged(room_of(side, gains[shown]));
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

double BandDecision::samples_to_tell(const Side& side, const Gain& gain, double samples,
                                     const ErrorShares& shares) const {
    const double deviation = std::sqrt(gain.difference.variance);
    if (!std::isfinite(deviation)) return 0.0;
    // From the limit to the end of the zone, as a factor.
    const double limit = ratio_of(side.limit_db) * gain.scale;
    const double delta = limit * std::fabs(ratio_of(side.at_least ? -zone_db_ : zone_db_) - 1.0);
    return halflsb::fixed_length_samples(shares.alpha, shares.beta, delta, deviation, samples);
}

double BandDecision::fixed_length_samples(const ResponseSums& sums, double samples, const ErrorShares& shares) const {
    double most = 0.0;
    for (const BandPoint& point : points_) {
        const Gain gain = gain_at(sums, point);
        for (const Side& side : sides_) most = std::max(most, samples_to_tell(side, gain, samples, shares));
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
            open.samples_needed = std::max(open.samples_needed, samples_to_tell(side, gain, samples, shares));
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
