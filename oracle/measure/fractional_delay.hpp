// How far a response is behind its reference beside whole samples, from the slope of the phase between them.
//
// With r the reference, y the response and e = y - r, the measure of response.hpp gives H = 1 + S_re / S_rr at each
// bin. A pure delay of d samples has the phase -2 pi f d, so weighted least squares through the origin say
//
//     d = -sum w f arg H / (2 pi sum w f^2),   w = S_rr |H|^2 / N
//
// N being what the board adds beside the response, from the spread between batches, averaged over 33 bins so that no
// bin is trusted because it happened to agree: S_rr |H|^2 / N is coherence / (1 - coherence) times the averages, and
// 1 / w the variance of the phase (Bendat and Piersol 2010, from memory; the slope: Piersol 1981, from memory). Bins
// where the phase is not known to 0.1 rad are left out, and so are 0 and 1/2, where a spectrum is real.
//
// The window shows a bin what lies beside it too, the stronger side more: of a power S(f) its middle is at f_k + v S' /
// S, v the variance of the window's kernel (smoothing_bins2), and that is the f of the bin. Bins where the power
// changes by more than half from bin to bin are left out.
//
// Its standard uncertainty: d is nearly linear in the differences D = H - 1, d(arg H) = Im(dD / H), so d is a weighted
// sum of them, and the spread of that sum between batches is its own (response_estimate.hpp): what neighbouring bins
// share is in it. A response that is no pure delay has the weighted mean of its phase over frequency instead.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>

#include "oracle/measure/response.hpp"

namespace halflsb {

struct FractionalDelay {
    double samples = 0.0;  ///< positive: late; within +-1
    double standard_uncertainty = 0.0;
    double degrees = 0.0;                                             ///< of freedom; 0: the spread is not known
    double from_cycles_per_sample = 0.0, to_cycles_per_sample = 0.0;  ///< of the bins that counted
};

/// Segment length of the measure for a record of that many samples, 64 to 4096: a slope needs no fine bins, and the
/// more segments, the better their spread is known; 128 where the record allows.
std::size_t delay_segment_for(std::int64_t length_samples);

/// `sums` are of the reference as stimulus and of response - reference as error, in bins. None where fewer than 8 bins
/// are clear.
std::optional<FractionalDelay> fractional_delay(const ResponseSums& sums);

}  // namespace halflsb
