// Butterworth and Chebyshev filters in second-order sections, from the poles of their analogue prototypes by the
// bilinear transform with pre-warped corners.
//
// Prototype, order N (Oppenheim and Schafer, Discrete-Time Signal Processing, appendix on continuous-time filters, from
// memory): poles -sinh(v) sin(t_k) +- j cosh(v) cos(t_k), t_k = (2 k - 1) pi / (2 N), with v = arsinh(1 / e) / N and
// e^2 = 10^(ripple_db / 10) - 1 for Chebyshev's type 1; on the unit circle for Butterworth. High-pass: s becomes 1 / s;
// band-pass: s becomes (s^2 + W1 W2) / (s (W2 - W1)), band-stop: its inverse. Corners W = tan(pi f / fs). Each pair of
// analogue poles becomes one section: s^2 + c1 s + c0 turns into a1 = 2 (c0 - 1) / a0, a2 = (1 - c1 + c0) / a0,
// a0 = 1 + c1 + c0. No polynomial of a higher order is ever formed.
//
// Which zeros go with which poles, and in what order: beginning with the section whose poles are nearest the unit
// circle, each takes those two of the remaining zeros that are nearest to its poles; this section comes last, the next
// one before it. A first-order section takes one zero. The gain is all in the first section; the others have b0 = 1.
#pragma once

#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

enum class ResponseShape { low_pass, high_pass, band_pass, band_stop };

struct RecursiveDesign {
    ResponseShape shape = ResponseShape::low_pass;
    /// Of the prototype: a band-pass or band-stop has twice as many poles. 1 .. 12.
    int order = 2;
    /// Chebyshev's, in the pass band: above 0. 0 is Butterworth.
    double ripple_db = 0.0;
    /// The corner of a low-pass or high-pass; from and to of a band. Butterworth has -3.01 dB there, Chebyshev
    /// -ripple_db. 0 < lower_hz (< upper_hz) < rate_hz / 2.
    double lower_hz = 0.0, upper_hz = 0.0;
    double rate_hz = 1.0;
};

/// Gain 1 at zero frequency (low-pass), half the rate (high-pass), both (band-stop) or at the centre, where the tangent
/// is the geometric mean of those at the corners (band-pass); Chebyshev of even order has -ripple_db there. Gains of
/// low-pass and high-pass hold for the coefficients as rounded.
std::vector<BiquadSection> designed_sections(const RecursiveDesign& design);

}  // namespace halflsb
