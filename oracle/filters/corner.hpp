// From frequencies and times, as plans give them, to coefficients. By exact_math and wide integers, so the
// reference has the same bits on every machine; the C library's exp and cos have not.
#pragma once

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// k = 1 - exp(-2 pi corner_hz / rate_hz), in 0 .. 1: the RC low-pass matched at the samples of its step response
/// (S. W. Smith, The Scientist and Engineer's Guide to Digital Signal Processing, chapter 19, from memory). The
/// gain at the corner is -3.01 dB for corners far below the rate; at a tenth of the rate the digital filter has -2.87
/// dB. Both arguments are positive, corner_hz at most rate_hz / 2. Correctly rounded but for 1 in 10^18.
double smoothing_of_corner(double corner_hz, double rate_hz);

/// k = 1 - exp(-1 / (time_constant_s rate_hz)), in 0 .. 1: after a step the rest falls to 1/e in time_constant_s.
/// Both arguments are positive.
double smoothing_of_time_constant(double time_constant_s, double rate_hz);

/// The notch of R. Bristow-Johnson, "Cookbook formulae for audio EQ biquad filter coefficients": with
/// w0 = 2 pi frequency_hz / rate_hz and alpha = sin(w0) / (2 q),
///     b0 = b2 = 1 / (1 + alpha), b1 = a1 = -2 cos(w0) / (1 + alpha), a2 = (1 - alpha) / (1 + alpha).
/// Gain 1 at zero frequency and at half the rate, 0 at frequency_hz; frequency_hz / q wide at -3.01 dB, but for
/// the warp of the bilinear transform. frequency_hz lies within 0 .. rate_hz / 2, both left out; q is positive.
BiquadSection notch_section(double frequency_hz, double q, double rate_hz);

}  // namespace halflsb
