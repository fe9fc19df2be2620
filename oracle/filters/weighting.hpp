// Frequency weightings A, C (IEC 61672-1) and K (ITU-R BS.1770) as second-order sections.
//
// A and C: the analytic form of the standard (poles at f1 twice, f4 twice and, for A, f2 and f3; two zeros at 0 for C,
// four for A), each pole moved by the plain bilinear transform s = 2 fs (1 - z^-1) / (1 + z^-1), none pre-warped, gain
// 1 at 1 kHz. Plain, because that is how firmware mostly has it, and because no choice of warp keeps the whole curve.
// What it costs near half the rate is in docs/methods.md, beside the limits of class 1.
//
// K at 48 kHz is the table of the recommendation to its last digit. At other rates both sections come from the analogue
// parameters that reproduce that table, by the bilinear transform with pre-warped frequencies; the second one's gain of
// +0.0433 dB at high frequencies, which its numerator 1, -2, 1 gives at 48 kHz, is kept, as the recommendation wants
// the same response at every rate (from memory). Programs that leave the numerator 1, -2, 1 differ by 0.02 dB at 96
// kHz.
#pragma once

#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

enum class WeightingCurve { a, c, k };

/// Sample rates must be above this: A and C are 1 at 1 kHz, which must lie below half the rate; K has a corner at 1682
/// Hz.
double least_weighting_rate_hz(WeightingCurve curve);

/// A: (f4, f4), (f3, f2), (f1, f1); C: (f4, f4), (f1, f1), the gain in the first. K: shelf, high-pass.
std::vector<BiquadSection> weighting_sections(WeightingCurve curve, double rate_hz);

/// The design goal of A and C in dB, by the analytic form; frequency_hz above 0.
double weighting_goal_db(WeightingCurve curve, double frequency_hz);

}  // namespace halflsb
