// How sure a response estimate is, from the spread between its batches.
//
// A batch b gives the cross spectrum C_b and the power S_b of a point; their sums give the difference
// D = sum C_b / sum S_b. What a batch does not share with it, u_b = C_b - D S_b, is what the board adds that the
// response cannot explain: rounding, noise, distortion. From it follows the variance of D, whatever the power of that
// rest does with the level of the stimulus:
//
//     var D = sum |u_b|^2 / (1 - S_b / S) / S^2          (White 1980; MacKinnon and White 1985, their HC2)
//
// For noise and for tones of random phase, the rest has no preferred direction in the complex plane (a shift in time
// turns it), so the real and the imaginary part share this variance, and a batch gives two degrees of freedom; at 0 and
// at 1/2 the spectra are real, and it gives one; power varies so much from batch to batch there that (1 - S_b / S)^2
// stands in the place of (1 - S_b / S) (their HC3, which errs on the wide side). Batches of unequal power count as
// 1 / sum (S_b / S)^2 equal ones (Kish 1965). A rest that repeats exactly in each batch (the periods of one stimulus)
// shows no spread: periods are never batches.
#pragma once

#include <complex>
#include <cstddef>
#include <span>
#include <vector>

#include "oracle/measure/response.hpp"

namespace halflsb {

/// A complex figure, and how sure it is.
struct ResponseEstimate {
    std::complex<double> value;
    double variance = 0.0;  ///< of its real part, and of its imaginary part
    double degrees = 0.0;   ///< of freedom of that variance; 0: nothing is known of it
};

/// One term of a weighted sum of points.
struct ResponseTerm {
    std::size_t point;
    std::complex<double> weight;
};

/// H - H_design at a point. NaN with no degrees where the stimulus has no power. Between bins the window smooths what
/// differs from the design; half its variance times the second difference over the neighbours is taken off again, so
/// that what remains is of fourth order. Where a neighbour has no power to speak of, nothing is taken off.
ResponseEstimate estimate_of(const ResponseSums& sums, std::size_t point);

/// sum weight x (H - H_design): the terms are correlated (neighbouring bins share samples), the batches know how.
/// Nothing is taken off for the window.
ResponseEstimate estimate_of(const ResponseSums& sums, std::span<const ResponseTerm> terms);

/// For a stimulus that passes each frequency once, so that no two batches see it: the spread between neighbouring
/// points. The difference is fitted by a straight line over 13 points, every second one (their windows then share 1/6),
/// weighted by their power; what departs from the line is taken as spread, so a response that bends within them only
/// widens the interval. The idea is that of Pintelon and Schoukens (2012, ch. 7: local polynomial method).
ResponseEstimate estimate_from_neighbours(const ResponseSums& sums, std::size_t point);

/// The first of both that knows its spread well; which one is chosen hangs on the stimulus alone. Points that are no
/// bins have no neighbours, and those at 0 and 1/2 none of their kind.
ResponseEstimate surest_estimate(const ResponseSums& sums, std::size_t point);

/// A range that holds the true figure as often as asked; ends may be infinite.
struct Interval {
    double low = 0.0, high = 0.0;
};

/// |design + estimate| with a two-sided confidence in (0, 1), as a factor, not in dB. Along the estimated direction;
/// where the response is not clear of its own spread, the lower end is 0 and the upper end that of a disc.
Interval gain_interval(std::complex<double> design, const ResponseEstimate& difference, double confidence);

/// arg(1 + estimate / design) in radians: how far the phase is from the design's, within +-pi; whole circle where the
/// response is not clear of its spread.
Interval phase_interval(std::complex<double> design, const ResponseEstimate& difference, double confidence);

/// What |design + estimate| surely does not exceed, or reach, with an error of at most `probability` each; for
/// decisions.
///
/// Above: |H^| is at least its part along the true H, which is |H| plus normal noise, so |H| > |H^| + t s is as rare as
/// t says, whatever the noise does across. Below: noise across lengthens H^ by n^2 / 2|H|, and the bound gives way by
/// what t gives for it; that is enough while t s < |H| / 2, and below it the bound is 0.
double gain_surely_below(std::complex<double> design, const ResponseEstimate& difference, double probability);
double gain_surely_above(std::complex<double> design, const ResponseEstimate& difference, double probability);

}  // namespace halflsb
