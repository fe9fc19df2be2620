// The sine that fits a record best in least squares:
//
//     y[n] = amplitude cos(2 pi f n + phase) + offset,   n from 0
//
// with three parameters when f is known, with four when f is to be found near a start. Both are the matrix fits
// of IEEE 1057 and IEEE 1241 (the standards' text from memory). Where stimulus and filter share the sample clock,
// f is known exactly and three parameters are right: a fourth would let the fit hide a wrong frequency.
//
// Conditioning. Time is counted from the middle of the record. Then the columns cosine, sine and 1 have
// correlations below 1/3 from one cycle on, and the derivative by f, scaled to length 1, is nearly orthogonal
// to all three from a few cycles on; so normal equations lose less than one digit. The solution is corrected once from
// its own residual (three parameters) or at each step (four).
//
// Uncertainties. Standard ones, for white noise of the residual's variance s^2 = sum r^2 / (N - parameters):
// s^2 times the inverse of the normal matrix. For many cycles that is the Cramer-Rao bound (Rife and Boorstyn
// 1974; from memory): var amplitude = 2 s^2 / N, var f = 6 s^2 / (pi^2 amplitude^2 N (N^2 - 1)). A quantised
// coherent sine has a residual that repeats: the fit is then the same in each run, and these are upper guides.
#pragma once

#include <cstddef>
#include <optional>
#include <span>
#include <string_view>

#include "oracle/measure/figure.hpp"

namespace halflsb {

/// Why no answer can be given.
enum class ToneFault {
    none,
    too_short,       ///< fewer samples than the least length
    too_long,        ///< more than the greatest length
    not_finite,      ///< a sample is NaN or infinite
    near_an_end,     ///< less than one cycle from frequency 0 or from half the rate
    no_tone,         ///< no amplitude at the frequency that stands out of the noise or of the arithmetic
    ran_away,        ///< the frequency left start +- 1 / samples: the start was too far off
    not_converged,   ///< 30 steps were not enough
    not_determined,  ///< two of the columns are too much alike
};
/// The reason in words that can stand after "cannot be judged: ".
std::string_view reason_of(ToneFault fault);

inline constexpr std::size_t sine_fit_least_samples = 16;

struct SineFit {
    Figure amplitude;           ///< peak, in the samples' unit
    Figure phase_radians;       ///< of the cosine at n = 0, within (-pi, pi]
    Figure offset;              ///< in the samples' unit
    Figure cycles_per_sample;   ///< uncertainty 0 where it was given
    double rms_residual = 0.0;  ///< sqrt(sum r^2 / N), the divisor of the standards
    std::size_t samples = 0;
    int parameters = 3;
    int steps = 0;  ///< of the search for the frequency
};

struct SineFitAnswer {
    std::optional<SineFit> fit;
    ToneFault fault = ToneFault::none;  ///< none exactly when there is a fit
};

/// f within [1 / N, 1/2 - 1 / N]. Cost: four passes of about ten operations a sample, no memory that grows.
SineFitAnswer fit_sine_at(double cycles_per_sample, std::span<const double> samples);

/// Gauss-Newton from the three-parameter fit at the start, which must lie within about half a bin (0.5 / N) of
/// the truth. Ends when a step turns the ends of the record by less than 1e-10 radians against each other (then
/// the next one, quadratically smaller for a small residual, is below the arithmetic). Cost: one pass a step.
SineFitAnswer fit_sine_near(double start_cycles_per_sample, std::span<const double> samples);

/// samples less the fitted sine and offset; residual.size() == samples.size(), may be the same memory.
void subtract_sine(const SineFit& fit, std::span<const double> samples, std::span<double> residual);

}  // namespace halflsb
