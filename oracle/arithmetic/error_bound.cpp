#include "oracle/arithmetic/error_bound.hpp"

#include <algorithm>
#include <cmath>
#include <limits>

#include "oracle/arithmetic/float_points.hpp"
#include "oracle/arithmetic/path_sums.hpp"
#include "oracle/arithmetic/reference_error.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

constexpr double bits_above = 64.0;  // 6 bits: the noise must spread over that many of the steps kept, or had
/// A remainder is independent of the one before where what is dropped moves by half a step between two samples (rms):
/// of a normal move they correlate by exp(-2 pi^2 / 4) = 0.7 %. A slow pole in a direct form moves it by less: its
/// coefficients are nearly whole, and the loop has a dead band.
constexpr double least_move_steps = 0.5;
constexpr double one_sign = 1e-9;      // of sum |h|: a path with less of the other sign has but one
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

/// Of white noise of rms 1 at its start; 0 where nobody knows.
double rms_gain(const FilterChain& path) {
    return is_linear(path) && !changes_rate(path) ? l2_norm(path) : 0.0;
}

/// A point with what does not hang on the stimulus.
struct KnownPoint {
    RoundingPoint point;
    PathSums sums;
    /// The step kept, or the coarsest of the words on the way to it, by the bits that they use: a few codes of a coarse
    /// word, brought into a finer one, leave a few remainders and not all.
    double coarsest_step = 0.0;
    /// Of the number that is shortened, for white noise of rms 1 at the input; looked up once it is asked for.
    std::optional<double> level_per_rms;

    /// Likewise, of what RoundingPoint::remainder leads to.
    std::optional<double> move_per_rms;

    bool moves(double input_rms) {
        if (point.remainder.empty()) return true;
        if (!move_per_rms) move_per_rms = rms_gain(point.remainder);
        return input_rms * *move_per_rms >= least_move_steps * point.step;
    }

    double level(double input_rms) {
        if (!level_per_rms) level_per_rms = rms_gain(point.from_input) * point.factor;
        return input_rms * *level_per_rms;
    }
};

/// What the points add up to, by kind.
class Budget {
public:
    Budget(const BoundUse& use, ErrorBound& bound) : use_(use), bound_(bound) {}

    void add(KnownPoint& known) {
        const RoundingPoint& point = known.point;
        const PathSums& sums = known.sums;
        BoundTerm term = term_of(point, sums);
        bound_.lower += term.lower;
        bound_.upper += term.upper;
        bound_.worst_bias_lower += term.bias_lower;
        bound_.worst_bias_upper += term.bias_upper;
        const double any = product(point.error.largest(), sums.l1());
        bound_.worst_rms += any;
        const bool has_both_signs = std::min(sums.positive, -sums.negative) > one_sign * sums.l1();
        clips_one_way_ = clips_one_way_ && !has_both_signs;
        term.is_statistical = use_.noise_like && sums.is_one_response &&
                              known.level(use_.input_rms) >= bits_above * known.coarsest_step &&
                              known.moves(use_.input_rms);
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
        // No mean is beyond the largest errors.
        bound_.worst_bias_lower = std::max(bound_.worst_bias_lower - reference_error, bound_.lower);
        bound_.worst_bias_upper = std::min(bound_.worst_bias_upper + reference_error, bound_.upper);
        bound_.clipped_bias_lower = clips_one_way_ ? bound_.worst_bias_lower : bound_.lower;
        bound_.clipped_bias_upper = clips_one_way_ ? bound_.worst_bias_upper : bound_.upper;
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
        if (!point.is_float) {
            term.lowest = e.lowest / point.step;
            term.highest = e.highest / point.step;
        }
        if (!sums.has_signs) {
            term.upper = product(e.largest(), sums.l1());
            term.lower = -term.upper;
            term.bias_lower = term.lower;
            term.bias_upper = term.upper;
            term.formula = "error x largest gain of what follows (Jackson 1970)";
            return term;
        }
        term.lower = product(e.lowest, sums.positive) + product(e.highest, sums.negative);
        term.upper = product(e.highest, sums.positive) + product(e.lowest, sums.negative);
        const double positive = sums.step_positive + sums.past_positive,
                     negative = sums.step_negative + sums.past_negative;
        term.bias_lower = product(e.lowest, positive) + product(e.highest, negative);
        term.bias_upper = product(e.highest, positive) + product(e.lowest, negative);
        term.formula = point.is_float ? "u x largest number (Higham, chapter 3) x sum |h|"
                                      : "error x sum of h above and below 0 (Jackson 1970)";
        return term;
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
        // Of the past nobody knows what came in: it has its worst case.
        any_rms_ += product(e.largest(), sums.past_rms);
        term.bias_lower = e.mean_lowest * sums.step_positive + e.mean_highest * sums.step_negative;
        term.bias_upper = e.mean_highest * sums.step_positive + e.mean_lowest * sums.step_negative;
        if (!e.mean_varies) {
            // The same mean in every sample: what is below 0 of the step response takes back what is above it.
            const double mean_step = sums.step_positive + sums.step_negative;
            term.bias_lower = std::min(e.mean_lowest * mean_step, e.mean_highest * mean_step);
            term.bias_upper = std::max(e.mean_lowest * mean_step, e.mean_highest * mean_step);
        }
        term.bias_lower += product(e.lowest, sums.past_positive) + product(e.highest, sums.past_negative);
        term.bias_upper += product(e.highest, sums.past_positive) + product(e.lowest, sums.past_negative);
    }

    const BoundUse& use_;
    ErrorBound& bound_;
    bool all_statistical_ = true;
    bool clips_one_way_ = true;
    double any_rms_ = 0.0;       ///< of errors that may go with anything
    double constant_rms_ = 0.0;  ///< of constant means
    double variance_ = 0.0, peak_amplitude_ = 0.0, bias_variance_ = 0.0;
    double bias_lower_ = 0.0, bias_upper_ = 0.0;
};

}  // namespace

class BoundDeriver::Paths {
public:
    explicit Paths(DescribedChain chain)
        : chain_(std::move(chain)), exact_(exact_chain(chain_)), points_(rounding_points(chain_, exact_)) {}

    const DescribedChain& chain() const { return chain_; }

    ErrorBound derive(const BoundUse& use) {
        const double largest_input =
            use.largest_input > 0.0 ? use.largest_input : largest_value(chain_.stages.front().in);
        ErrorBound bound;
        bound.step = step_of(chain_.stages.back().out.word);
        Budget budget(use, bound);
        Known& known = known_for(use.samples, use.has_past, largest_input);
        for (KnownPoint& point : known.points) budget.add(point);
        budget.finish(known.reference_error);
        return bound;
    }

private:
    struct Known {
        std::int64_t samples;
        bool has_past;
        double largest_input, reference_error;
        std::vector<KnownPoint> points;
    };

    Known& known_for(std::int64_t samples, bool has_past, double largest_input) {
        for (Known& known : known_) {
            if (known.samples == samples && known.has_past == has_past && known.largest_input == largest_input)
                return known;
        }
        // Plans with more lengths than that pay for each again.
        if (known_.size() >= most_known) known_.clear();
        Known known{samples, has_past, largest_input, reference_error(chain_, exact_, largest_input), {}};
        const auto add = [&](const RoundingPoint& point) {
            const auto lags = std::min(most_lags, static_cast<std::size_t>(point.count));
            known.points.push_back({point,
                                    path_sums(path_of(point, exact_.stages), samples, lags, has_past),
                                    std::max({point.step, point.coarsest_step, coarsest_word_before(point.stage)}),
                                    {},
                                    {}});
        };
        for (const RoundingPoint& point : points_) add(point);
        // What ran before the record, nobody knows for how long, adds to what a running sum has lost.
        constexpr std::int64_t for_ever = std::numeric_limits<std::int64_t>::max();
        for (const RoundingPoint& point :
             float_points(chain_, exact_, {has_past ? for_ever : samples, largest_input})) {
            add(point);
        }
        known_.push_back(std::move(known));
        return known_.back();
    }

    double coarsest_word_before(std::size_t stage) const {
        double coarsest = 0.0;
        for (std::size_t i = 0; i <= stage; ++i) {
            const Port& in = chain_.stages[i].in;
            if (!in.is_float) coarsest = std::max(coarsest, step_of(in.word));
        }
        return coarsest;
    }

    static constexpr std::size_t most_known = 64;

    DescribedChain chain_;
    ExactChain exact_;
    std::vector<RoundingPoint> points_;
    std::vector<Known> known_;
};

BoundDeriver::BoundDeriver(DescribedChain chain) : paths_(std::make_unique<Paths>(std::move(chain))) {}
BoundDeriver::~BoundDeriver() = default;
BoundDeriver::BoundDeriver(BoundDeriver&&) noexcept = default;
BoundDeriver& BoundDeriver::operator=(BoundDeriver&&) noexcept = default;

const DescribedChain& BoundDeriver::chain() const { return paths_->chain(); }
ErrorBound BoundDeriver::derive(const BoundUse& use) { return paths_->derive(use); }

ErrorBound derive(const DescribedChain& chain, const BoundUse& use) { return BoundDeriver(chain).derive(use); }

}  // namespace halflsb
