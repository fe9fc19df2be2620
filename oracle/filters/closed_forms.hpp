// What is asked of a filter beside its gain (response_at, filter.hpp): phase, group delay, step response, poles and
// zeros. For linear stages of one sample rate. Frequencies are in cycles a sample, 0 .. 0.5.
//
// Zeros on the unit circle. There the gain is 0, and phase and delay do not exist: the phase jumps by half a turn. The
// functions below return the continuous continuation of the delay (a zero on the circle adds half a sample at
// every frequency), and the phase behind a jump is half a turn more, as it is in the limit of a zero that comes from
// inside.
#pragma once

#include <complex>
#include <span>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// The phase in radians, -pi .. pi: arg of response_at.
double phase_at(const FilterChain& chain, double cycles_per_sample);

/// The phase without wraps, at frequencies in ascending order; it begins at a multiple of half a turn where the gain at
/// zero frequency is not 0. Of sections, combs and moving averages in closed form, whatever the grid. Of a symmetric or
/// antisymmetric FIR likewise but for the jumps, which are those between neighbours of the grid. Another FIR is
/// followed along the grid by its group delay, from a value in -pi .. pi at the first frequency on: right where
/// neighbours are at most a tenth of 1 / taps apart.
std::vector<double> unwrapped_phase(const FilterChain& chain, std::span<const double> frequencies);

/// Minus the derivative of the phase by the angular frequency, in samples. By section in closed form: with
/// C(w) = e^(j w) (p0 + p1 e^(-j w) + p2 e^(-2 j w)) a polynomial delays by 1 - (p0 - p2)(p0 + p2 + p1 cos w) / |C|^2,
/// the numerator's delay counts, the denominator's is taken off. FIR: the real part of sum k h[k] e^(-j w k) over
/// sum h[k] e^(-j w k); (N - 1) / 2 where the taps are symmetric or antisymmetric. Not a number where another FIR
/// returns nothing at all, and for kinds that are not linear or change the rate. A recursion by b and a is one FIR over
/// another.
double group_delay_samples(const FilterChain& chain, double cycles_per_sample);

/// The response to 1, 1, 1 ... from rest.
std::vector<double> step_response(const FilterChain& chain, std::size_t length);

/// Poles or zeros of one section in the z-plane: the two solutions of z^2 + a1 z + a2 = 0, or those of
/// b0 z^2 + b1 z + b2 = 0. Those at the origin, and missing ones where b0 is 0, are left out. Conjugates come together,
/// the one above the real axis first.
std::vector<std::complex<double>> poles_of(const BiquadSection& section);
std::vector<std::complex<double>> zeros_of(const BiquadSection& section);

}  // namespace halflsb
