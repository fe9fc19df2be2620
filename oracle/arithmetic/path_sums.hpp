// Sums over the impulse response h of a path, and over its step response s[n] = h[0] + ... + h[n], that the errors of a
// rounding point end in.
#pragma once

#include <cstdint>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

struct PathSums {
    /// Of the h[n] above 0 and below it. What was not run is in both (no_limit where no bound is known).
    double positive = 0.0, negative = 0.0;
    double squares = 0.0;  ///< sum h^2
    /// autocorrelation[l] = sum h[n] h[n + l]; [0] is squares. As many as were asked for.
    std::vector<double> autocorrelation;
    double dc = 0.0;  ///< s at its end: the gain at zero frequency
    /// Means over the first `samples` of s where it is positive, where it is negative, and of s^2.
    double step_positive = 0.0, step_negative = 0.0, step_squares = 0.0;

    /// Of errors made before the first of the `samples`, however long ago: sums of what each puts into their mean,
    /// (s[n + samples] - s[n]) / samples, above 0 and below it; and the rms over the samples of what errors within
    /// -1 .. 1 can put into them. 0 when not asked for.
    double past_positive = 0.0, past_negative = 0.0, past_rms = 0.0;

    /// False around a median and where the rate changes: then `largest` is the largest output, of either sign, for
    /// inputs within -1 .. 1, positive and negative are those of the output phase that has the most of each, and the
    /// others no smaller than what they stand for.
    bool is_one_response = true;
    /// False around a median: positive and -negative are the largest output too.
    bool has_signs = true;
    double largest = 0.0;

    double l1() const { return is_one_response ? positive - negative : largest; }
};

/// Runs the path until its rest is proven to be below 1e-12 of sum |h| (impulse_run.hpp), at most 2^22 samples; `lags`
/// of the autocorrelation, at least 1. samples > 0. With `has_past` the sums of the past, too: that keeps h.
PathSums path_sums(const FilterChain& path, std::int64_t samples, std::size_t lags, bool has_past = false);

}  // namespace halflsb
