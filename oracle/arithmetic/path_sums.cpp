#include "oracle/arithmetic/path_sums.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/impulse_run.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

constexpr std::int64_t most_samples = std::int64_t{1} << 22;
constexpr double tail = 1e-12;

class Sums {
public:
    Sums(std::int64_t samples, std::size_t lags) : samples_(samples), past_(std::max<std::size_t>(lags, 1), 0.0) {
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
        if (at_++ < samples_) add_steps(1.0);
    }

    PathSums finish(double rest) {
        // What remains of the record sees the step response at its end.
        if (at_ < samples_) add_steps(static_cast<double>(samples_ - at_));
        sums_.positive += rest;
        sums_.negative -= rest;
        sums_.squares = sums_.autocorrelation.front();
        sums_.dc = step_;
        const auto count = static_cast<double>(samples_);
        sums_.step_positive /= count;
        sums_.step_negative /= count;
        sums_.step_squares /= count;
        return std::move(sums_);
    }

    double size() const { return sums_.l1(); }

private:
    void add_steps(double count) {
        (step_ > 0.0 ? sums_.step_positive : sums_.step_negative) += count * step_;
        sums_.step_squares += count * step_ * step_;
    }

    std::int64_t samples_, at_ = 0;
    std::vector<double> past_;
    std::size_t place_ = 0;
    double step_ = 0.0;
    PathSums sums_;
};

}  // namespace

PathSums path_sums(const FilterChain& path, std::int64_t samples, std::size_t lags) {
    if (!is_linear(path) || changes_rate(path)) {
        // No one impulse response: what is known is how large the output of something within -1 .. 1 can get.
        PathSums known;
        known.positive = known.step_positive = l1_norm(path);
        known.negative = known.step_negative = -known.positive;
        known.dc = known.positive;
        known.squares = known.step_squares = known.positive * known.positive;
        known.autocorrelation.assign(std::max<std::size_t>(lags, 1), known.squares);
        known.is_one_response = false;
        return known;
    }
    Sums sums(std::max<std::int64_t>(samples, 1), lags);
    ImpulseRun run(path);
    double rest = no_limit;
    for (std::int64_t n = 0; n < most_samples; n += static_cast<std::int64_t>(ImpulseRun::piece_samples)) {
        for (const double h : run.next()) sums.add(h);
        rest = run.rest();
        if (rest <= tail * sums.size()) break;
    }
    return sums.finish(rest);
}

}  // namespace halflsb
