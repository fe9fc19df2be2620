#include "oracle/measure/response_estimate.hpp"

#include <algorithm>
#include <cmath>
#include <limits>
#include <numbers>

#include "oracle/measure/quantile.hpp"

namespace halflsb {
namespace {

using Complex = std::complex<double>;

constexpr double none = std::numeric_limits<double>::quiet_NaN();

/// sum (S_b / S)^2: 1 / (how many equal batches they are).
double share_squares(const BatchSums& sums, std::size_t point, double total_power) {
    double squares = 0.0;
    for (std::size_t batch = 0; batch < sums.batches(); ++batch) {
        const double power = sums.power(batch, point);
        squares += power * power;
    }
    return squares / (total_power * total_power);
}

/// Batches side by side share half a segment, which the spread within them does not show: a batch of m segments has the
/// variance m + 2 (m - 1) r of one, and 2 r more with each neighbour.
///
/// At 0 and 1/2 an offset of the board is the same in each segment: the correlation is that of the stimulus alone, the
/// square root of the product.
double neighbours_share(const ResponseSums& sums, bool is_real) {
    const double m = sums.segments_a_part * static_cast<double>(sums.sums.parts_a_batch());
    const double r = is_real ? std::sqrt(sums.neighbour_correlation) : sums.neighbour_correlation;
    return 1.0 + 2.0 * r / (m + 2.0 * (m - 1.0) * r);
}

bool real_bin(double cycles_per_sample) { return cycles_per_sample == 0.0 || cycles_per_sample == 0.5; }

/// is_real: only the real part of the sum means something.
ResponseEstimate weighted_sum(const ResponseSums& all, std::span<const ResponseTerm> terms, bool is_real) {
    const BatchSums& sums = all.sums;
    ResponseEstimate estimate;
    std::vector<BatchSums::Total> totals;
    double largest_share_squares = 0.0;
    for (const ResponseTerm& term : terms) {
        totals.push_back(sums.total(term.point));
        estimate.value += term.weight * totals.back().ratio();
        largest_share_squares = std::max(largest_share_squares, share_squares(sums, term.point, totals.back().power));
    }
    if (!std::isfinite(estimate.value.real()) || !std::isfinite(estimate.value.imag()))
        return {estimate.value, none, 0.0};
    if (is_real) estimate.value = estimate.value.real();
    double squares = 0.0;
    for (std::size_t batch = 0; batch < sums.batches(); ++batch) {
        Complex rest;
        for (std::size_t i = 0; i < terms.size(); ++i) {
            const double power = sums.power(batch, terms[i].point);
            const double left = 1.0 - power / totals[i].power;
            if (!(left > 0.0)) continue;  // all power in one batch: no degrees, said below
            const Complex u = sums.cross(batch, terms[i].point) - totals[i].ratio() * power;
            rest += terms[i].weight * u / (totals[i].power * (is_real ? left : std::sqrt(left)));
        }
        squares += is_real ? rest.real() * rest.real() : std::norm(rest) / 2.0;
    }
    const double equal_batches = 1.0 / largest_share_squares;
    estimate.variance = squares * neighbours_share(all, is_real);
    estimate.degrees = (is_real ? 1.0 : 2.0) * std::max(0.0, equal_batches - 1.0);
    return estimate;
}

}  // namespace

ResponseEstimate estimate_of(const ResponseSums& all, std::size_t point) {
    std::vector<ResponseTerm> terms{{point, 1.0}};
    const bool is_real = real_bin(all.cycles_per_sample[point]);
    if (all.smoothing_bins2 > 0.0) {
        const std::size_t last = all.cycles_per_sample.size() - 1;
        // The spectrum goes on mirrored beyond its ends.
        const std::size_t before = point == 0 ? 1 : point - 1, after = point == last ? last - 1 : point + 1;
        const double least = all.sums.total(point).power / 100.0;
        if (all.sums.total(before).power > least && all.sums.total(after).power > least) {
            const double part = all.smoothing_bins2 / 2.0;
            terms = {{before, -part}, {point, 1.0 + 2.0 * part}, {after, -part}};
        }
    }
    return weighted_sum(all, terms, is_real);
}

ResponseEstimate estimate_of(const ResponseSums& all, std::span<const ResponseTerm> terms) {
    return weighted_sum(all, terms, false);
}

ResponseEstimate estimate_from_neighbours(const ResponseSums& all, std::size_t point) {
    constexpr std::ptrdiff_t reach = 6, step = 2;
    const auto points = static_cast<std::ptrdiff_t>(all.sums.points());
    const BatchSums::Total own = all.sums.total(point);
    ResponseEstimate estimate{own.ratio(), none, 0.0};
    if (!(own.power > 0.0)) return estimate;
    // Weighted least squares of D_j = a + b j, its sums first.
    double w = 0.0, wj = 0.0, wjj = 0.0;
    Complex wd, wjd;
    std::vector<double> places, weights;
    std::vector<Complex> differences;
    for (std::ptrdiff_t j = -reach; j <= reach; ++j) {
        const std::ptrdiff_t k = static_cast<std::ptrdiff_t>(point) + j * step;
        if (k <= 0 || k >= points - 1) continue;  // 0 and 1/2 are real, and of another variance
        const BatchSums::Total total = all.sums.total(static_cast<std::size_t>(k));
        // A point at the edge of the stimulus' band says little, and little of its spread.
        if (!(total.power > own.power / 100.0)) continue;
        const double place = static_cast<double>(j), weight = total.power / own.power;
        places.push_back(place);
        weights.push_back(weight);
        differences.push_back(total.ratio());
        w += weight, wj += weight * place, wjj += weight * place * place;
        wd += weight * total.ratio(), wjd += weight * place * total.ratio();
    }
    const double determinant = w * wjj - wj * wj;
    if (places.size() < 4 || !(determinant > 0.0)) return estimate;
    const Complex a = (wjj * wd - wj * wjd) / determinant, b = (w * wjd - wj * wd) / determinant;
    double squares = 0.0;
    for (std::size_t i = 0; i < places.size(); ++i)
        squares += weights[i] * std::norm(differences[i] - a - b * places[i]);
    const double complex_degrees = static_cast<double>(places.size()) - 2.0;
    estimate.variance = squares / (2.0 * complex_degrees);
    estimate.degrees = 2.0 * complex_degrees;
    return estimate;
}

ResponseEstimate surest_estimate(const ResponseSums& all, std::size_t point) {
    constexpr double enough_degrees = 8.0;  // their t quantile at 1e-6 is 2.7 times the normal one
    const ResponseEstimate own = estimate_of(all, point);
    const bool points_are_bins = all.smoothing_bins2 > 0.0;
    // An offset of the board stands at 0 alone, and its neighbours know nothing of it.
    const bool has_like_neighbours = points_are_bins && !real_bin(all.cycles_per_sample[point]);
    if (own.degrees >= enough_degrees || !has_like_neighbours) return own;
    const ResponseEstimate shared = estimate_from_neighbours(all, point);
    return shared.degrees > own.degrees ? shared : own;
}

Interval gain_interval(Complex design, const ResponseEstimate& difference, double confidence) {
    const double gain = std::abs(design + difference.value), s = std::sqrt(difference.variance);
    const double t = student_quantile_above((1.0 - confidence) / 2.0, difference.degrees);
    if (!(t < std::numeric_limits<double>::infinity())) return {0.0, std::numeric_limits<double>::infinity()};
    // Noise across the response lengthens it by s^2 / 2|H| in the mean: taken off.
    if (gain > 3.0 * t * s) return {gain - s * s / (2.0 * gain) - t * s, gain - s * s / (2.0 * gain) + t * s};
    const double t_disc = student_quantile_above((1.0 - confidence) / 4.0, difference.degrees);
    return {std::max(0.0, gain - std::numbers::sqrt2 * t_disc * s), gain + std::numbers::sqrt2 * t_disc * s};
}

Interval phase_interval(Complex design, const ResponseEstimate& difference, double confidence) {
    const double gain = std::abs(design + difference.value), s = std::sqrt(difference.variance);
    const double t = student_quantile_above((1.0 - confidence) / 2.0, difference.degrees);
    if (!(gain > t * s)) return {-std::numbers::pi, std::numbers::pi};
    const double phase = std::arg((design + difference.value) * std::conj(design));
    const double half = std::asin(t * s / gain);
    return {phase - half, phase + half};
}

double gain_surely_below(Complex design, const ResponseEstimate& difference, double probability) {
    const double t = student_quantile_above(probability, difference.degrees);
    if (std::isinf(t)) return t;
    return std::abs(design + difference.value) + t * std::sqrt(difference.variance);
}

double gain_surely_above(Complex design, const ResponseEstimate& difference, double probability) {
    const double t = student_quantile_above(probability, difference.degrees);
    const double ts = t * std::sqrt(difference.variance);
    const double bound = std::abs(design + difference.value) - ts;
    if (!(ts < bound / 2.0)) return 0.0;
    return bound - ts * ts / (2.0 * bound);
}

}  // namespace halflsb
