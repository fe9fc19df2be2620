// How sure a mean or a slope is when its samples depend on each other: the long-run variance, the sum of the
// autocovariances over all lags, in units of one independent sample.
//
// From means of consecutive blocks, m_b of n_b samples: if blocks are longer than the noise remembers, they vary by
// v / n_b each. They are projected on K cosines j = 1 .. K over the run (j = 2 .. K + 1 beside a slope), made
// orthonormal with weights n_b among themselves, to the constant, and where a slope is fitted to the straight line:
//
//     v = 1 / K sum_j (sum_b n_b q_j(b) m_b)^2
//
// the orthonormal series estimate (Phillips 2005, HAC estimation by automated regression; Sun 2013, A
// heteroskedasticity and autocorrelation robust F test; both from memory). What is fitted does not reach v, and the
// projections of white normal noise are independent, so that (estimate - truth) / u has Student's t with K degrees of
// freedom; of correlated noise where its spectrum is flat over the lowest K / 2 cycles of the run. K = 32, less on
// fewer than 66 blocks: half of what the fit leaves. Against that, autocorrelations with a taper (Newey and West
// 1987) leave the degrees of freedom unknown, and the spread of the block means alone takes them for independent.
//
// For noise of the first order with correlation a from sample to sample the spectrum has fallen by a tenth at
// (1 - a) / 19 cycles a sample: runs of 300 / (1 - a) samples or more are long enough. On shorter ones v is too small.
#pragma once

#include <optional>
#include <span>

namespace halflsb {

struct SeriesVariance {
    double variance = 0.0;  ///< v above: a mean of N samples has the variance v / N
    int degrees = 0;        ///< K, of Student's t
};

enum class FittedCourse { constant, line };

/// means.size() == samples.size(): the means of consecutive blocks and how many samples each has, more than 0. None
/// for fewer than 8 blocks. Cost: some K^2 operations a block, below a millisecond for 256.
std::optional<SeriesVariance> series_variance(std::span<const double> means, std::span<const double> samples,
                                              FittedCourse fitted);

}  // namespace halflsb
