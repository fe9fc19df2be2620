#include "oracle/arithmetic/path_sums.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/impulse_run.hpp"
#include "oracle/filters/multirate_norms.hpp"
#include "oracle/filters/rates.hpp"
#include "oracle/filters/spaced_chain.hpp"

namespace halflsb {

namespace {

constexpr std::int64_t most_samples = std::int64_t{1} << 22;
constexpr double tail = 1e-12;

/// Of an impulse response whose samples stand `spacing` apart.
class Sums {
public:
    Sums(std::int64_t samples, std::size_t lags, int spacing, bool has_past)
        : samples_(samples),
          spacing_(spacing),
          has_past_(has_past),
          lags_(std::max<std::size_t>(lags, 1)),
          past_((lags_ - 1) / static_cast<std::size_t>(spacing) + 1, 0.0) {
        sums_.autocorrelation.assign(past_.size(), 0.0);
    }

    void add(double h) {
        (h > 0.0 ? sums_.positive : sums_.negative) += h;
        past_[place_] = h;
        const std::size_t lags = past_.size();
        for (std::size_t lag = 0; lag < lags; ++lag) {
            sums_.autocorrelation[lag] += h * past_[(place_ + lags - lag) % lags];
        }
        place_ = (place_ + 1) % lags;
        step_ += h;
        if (has_past_) {
            steps_.push_back(step_);
            sizes_.push_back(std::fabs(h));
        }
        if (at_ < samples_) add_steps(std::min<std::int64_t>(samples_ - at_, spacing_));
        at_ += spacing_;
    }

    PathSums finish(double rest) {
        if (has_past_) add_past(rest);
        // What remains of the record sees the step response at its end.
        if (at_ < samples_) add_steps(samples_ - at_);
        sums_.positive += rest;
        sums_.negative -= rest;
        sums_.squares = sums_.autocorrelation.front();
        sums_.dc = step_;
        const auto count = static_cast<double>(samples_);
        sums_.step_positive /= count;
        sums_.step_negative /= count;
        sums_.step_squares /= count;
        std::vector<double> spread(lags_, 0.0);
        for (std::size_t lag = 0; lag < past_.size(); ++lag)
            spread[lag * static_cast<std::size_t>(spacing_)] = sums_.autocorrelation[lag];
        sums_.autocorrelation = std::move(spread);
        return std::move(sums_);
    }

    double size() const { return sums_.l1(); }

private:
    void add_steps(std::int64_t samples) {
        const auto count = static_cast<double>(samples);
        (step_ > 0.0 ? sums_.step_positive : sums_.step_negative) += count * step_;
        sums_.step_squares += count * step_ * step_;
    }

    /// What was not run counts for both signs and for every sample.
    void add_past(double rest) {
        const auto count = static_cast<double>(samples_);
        const std::int64_t run = std::ssize(steps_), ahead = samples_ / spacing_, further = samples_ % spacing_;
        const auto step_at = [&](std::int64_t k) { return k < run ? steps_[static_cast<std::size_t>(k)] : step_; };
        const auto weigh = [&](double difference, std::int64_t times) {
            const double weight = difference / count * static_cast<double>(times);
            (weight > 0.0 ? sums_.past_positive : sums_.past_negative) += weight;
        };
        // Of the samples that share a step, the last `further` look one step more ahead.
        for (std::int64_t k = 0; k < run; ++k) {
            weigh(step_at(k + ahead) - step_at(k), spacing_ - further);
            weigh(step_at(k + ahead + 1) - step_at(k), further);
        }
        // An error from before reaches each sample of the record at most once.
        const double unknown = rest * (1.0 + std::min(1.0, static_cast<double>(run * spacing_) / count));
        sums_.past_positive += unknown;
        sums_.past_negative -= unknown;
        double behind = rest, squares = 0.0;
        for (std::int64_t k = run; k-- > 0;) {
            const auto times = std::clamp<std::int64_t>(samples_ - k * spacing_, 0, spacing_);
            squares += static_cast<double>(times) * behind * behind;
            behind += sizes_[static_cast<std::size_t>(k)];
        }
        squares += rest * rest * static_cast<double>(std::max<std::int64_t>(samples_ - run * spacing_, 0));
        sums_.past_rms = std::sqrt(squares / count);
    }

    std::int64_t samples_, at_ = 0;
    int spacing_;
    bool has_past_;
    std::size_t lags_;
    std::vector<double> past_;           ///< the last h, a ring
    std::vector<double> steps_, sizes_;  ///< s and |h|, where the past is asked for
    std::size_t place_ = 0;
    double step_ = 0.0;
    PathSums sums_;
};

/// No one impulse response: known is how large the output of something within -1 .. 1 can get, whenever it came.
PathSums sums_without_response(const FilterChain& path, std::size_t lags) {
    PathSums known;
    known.is_one_response = false;
    const auto phases = is_linear(path) ? sums_of_changing_rate(path, tail) : std::nullopt;
    known.has_signs = phases.has_value();
    known.largest = phases ? phases->sizes : l1_norm(path);
    known.positive = known.step_positive = phases ? phases->positive : known.largest;
    known.negative = known.step_negative = phases ? phases->negative : -known.largest;
    known.dc = known.largest;
    known.squares = known.step_squares = known.largest * known.largest;
    known.autocorrelation.assign(std::max<std::size_t>(lags, 1), known.squares);
    return known;
}

}  // namespace

PathSums path_sums(const FilterChain& path, std::int64_t samples, std::size_t lags, bool has_past) {
    if (!is_linear(path) || changes_rate(path)) return sums_without_response(path, lags);
    const SpacedChain spaced = without_spacing(path);
    Sums sums(std::max<std::int64_t>(samples, 1), lags, spaced.spacing, has_past);
    ImpulseRun run(spaced.chain);
    double rest = no_limit;
    for (std::int64_t n = 0; n < most_samples; n += static_cast<std::int64_t>(ImpulseRun::piece_samples)) {
        for (const double h : run.next()) sums.add(h);
        rest = run.rest();
        if (rest <= tail * sums.size()) break;
    }
    return sums.finish(rest);
}

}  // namespace halflsb
