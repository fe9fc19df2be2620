#include "oracle/arithmetic/error_bound.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/arithmetic/float_points.hpp"
#include "oracle/arithmetic/path_sums.hpp"
#include "oracle/arithmetic/reference_error.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

constexpr double bits_above = 64.0;    // 6 bits: the noise must spread over that many of the steps kept
constexpr std::size_t most_lags = 64;  // of products whose errors go together; beyond them |r[l]| <= r[0]

/// Sum over k, l < count of |r[k - l]|: the power of `count` errors that go together, one sample apart each.
double power_of_row(const std::vector<double>& autocorrelation, int count) {
    double power = count * autocorrelation.front();
    for (int lag = 1; lag < count; ++lag) {
        const auto at = static_cast<std::size_t>(lag);
        const double r = at < autocorrelation.size() ? std::fabs(autocorrelation[at]) : autocorrelation.front();
        power += 2.0 * (count - lag) * r;
    }
    return power;
}

double product(double factor, double amount) { return factor == 0.0 || amount == 0.0 ? 0.0 : factor * amount; }

/// What the points add up to, by kind.
class Budget {
public:
    Budget(const BoundUse& use, ErrorBound& bound) : use_(use), bound_(bound) {}

    void add(const RoundingPoint& point, const FilterChain& path) {
        const PathSums sums = path_sums(path, use_.samples, std::min(most_lags, static_cast<std::size_t>(point.count)));
        BoundTerm term = term_of(point, sums);
        bound_.lower += term.lower;
        bound_.upper += term.upper;
        bound_.worst_bias_lower += term.bias_lower;
        bound_.worst_bias_upper += term.bias_upper;
        const double any = product(point.error.largest(), sums.l1());
        bound_.worst_rms += any;
        term.is_statistical = use_.noise_like && sums.is_one_response && is_far_above(point);
        if (term.is_statistical) {
            add_noise(point, sums, term);
        } else {
            all_statistical_ = false;
            any_rms_ += any;
        }
        bias_lower_ += term.bias_lower;
        bias_upper_ += term.bias_upper;
        bound_.terms.push_back(std::move(term));
    }

    void finish(double reference_error) {
        const double count = static_cast<double>(use_.samples), t = std::log(4.0 / use_.alpha);
        bound_.reference_error = reference_error;
        bound_.lower -= reference_error;
        bound_.upper += reference_error;
        bound_.is_statistical = use_.noise_like && all_statistical_;
        // Hsu, Kakade and Zhang 2012 for the noise, sub-Gaussian tails for what is linear in it.
        const double peak = peak_amplitude_ * peak_amplitude_ / count;
        const double noise = variance_ + 2.0 * std::sqrt(variance_ * peak * t) + 2.0 * peak * t;
        const double cross = 2.0 * constant_rms_ * std::sqrt(2.0 * t * peak);
        const double rms = any_rms_ + std::sqrt(constant_rms_ * constant_rms_ + cross + noise) + reference_error;
        bound_.rms = std::min(rms, bound_.largest());
        bound_.worst_rms = std::min(bound_.worst_rms + reference_error, bound_.largest());
        bound_.worst_bias_lower -= reference_error;
        bound_.worst_bias_upper += reference_error;
        const double spread = std::sqrt(2.0 * t * bias_variance_ / count) + reference_error;
        bound_.bias_lower = std::max(bias_lower_ - spread, bound_.worst_bias_lower);
        bound_.bias_upper = std::min(bias_upper_ + spread, bound_.worst_bias_upper);
    }

private:
    static BoundTerm term_of(const RoundingPoint& point, const PathSums& sums) {
        BoundTerm term;
        term.name = point.name;
        term.step = point.step;
        term.parts = point.parts;
        term.count = point.count;
        term.l1 = sums.l1();
        term.noise_gain = sums.squares;
        term.dc_gain = sums.dc;
        const RoundingError& e = point.error;
        if (!sums.is_one_response) {
            term.upper = product(e.largest(), sums.l1());
            term.lower = -term.upper;
            term.bias_lower = term.lower;
            term.bias_upper = term.upper;
            term.formula = "error x largest gain of what follows (Jackson 1970)";
            return term;
        }
        term.lower = product(e.lowest, sums.positive) + product(e.highest, sums.negative);
        term.upper = product(e.highest, sums.positive) + product(e.lowest, sums.negative);
        term.bias_lower = product(e.lowest, sums.step_positive) + product(e.highest, sums.step_negative);
        term.bias_upper = product(e.highest, sums.step_positive) + product(e.lowest, sums.step_negative);
        term.formula = point.is_float ? "u x largest number (Higham, chapter 3) x sum |h|"
                                      : "error x sum of h above and below 0 (Jackson 1970)";
        return term;
    }

    bool is_far_above(const RoundingPoint& point) const {
        if (!is_linear(point.from_input) || changes_rate(point.from_input)) return false;
        const double level = use_.input_rms * std::sqrt(noise_power_gain(point.from_input)) * point.factor;
        return level >= bits_above * point.step;
    }

    void add_noise(const RoundingPoint& point, const PathSums& sums, BoundTerm& term) {
        const RoundingError& e = point.error;
        const auto count = static_cast<double>(point.count);
        term.variance = point.variance_each * power_of_row(sums.autocorrelation, point.count);
        variance_ += term.variance;
        peak_amplitude_ += std::sqrt(point.variance_each) * count * sums.l1();
        bias_variance_ += point.variance_each * count * count * sums.step_squares;
        const double mean = std::max(-e.mean_lowest, e.mean_highest);
        if (e.mean_varies) {
            any_rms_ += mean * sums.l1();
        } else {
            constant_rms_ += mean * std::sqrt(sums.step_squares);
        }
        term.bias_lower = e.mean_lowest * sums.step_positive + e.mean_highest * sums.step_negative;
        term.bias_upper = e.mean_highest * sums.step_positive + e.mean_lowest * sums.step_negative;
        if (!e.mean_varies) {
            // The same mean in every sample: what is below 0 of the step response takes back what is above it.
            const double mean_step = sums.step_positive + sums.step_negative;
            term.bias_lower = std::min(e.mean_lowest * mean_step, e.mean_highest * mean_step);
            term.bias_upper = std::max(e.mean_lowest * mean_step, e.mean_highest * mean_step);
        }
    }

    const BoundUse& use_;
    ErrorBound& bound_;
    bool all_statistical_ = true;
    double any_rms_ = 0.0;       ///< of errors that may go with anything
    double constant_rms_ = 0.0;  ///< of constant means
    double variance_ = 0.0, peak_amplitude_ = 0.0, bias_variance_ = 0.0;
    double bias_lower_ = 0.0, bias_upper_ = 0.0;
};

}  // namespace

ErrorBound derive(const DescribedChain& chain, const BoundUse& use) {
    const ExactChain exact = exact_chain(chain);
    ErrorBound bound;
    bound.step = step_of(chain.stages.back().out.word);
    Budget budget(use, bound);
    const Port& in = chain.stages.front().in;
    const double largest_input = use.largest_input > 0.0 ? use.largest_input : largest_value(in);
    for (const RoundingPoint& point : rounding_points(chain, exact)) {
        budget.add(point, path_of(point, exact.stages));
        bound.terms.back().lowest = point.error.lowest / point.step;
        bound.terms.back().highest = point.error.highest / point.step;
    }
    for (const RoundingPoint& point : float_points(chain, exact, {use.samples, largest_input})) {
        budget.add(point, path_of(point, exact.stages));
    }
    budget.finish(reference_error(chain, exact, largest_input));
    return bound;
}

}  // namespace halflsb
