// The sections of the Audio EQ Cookbook (R. Bristow-Johnson; W3C Audio Working Group, Audio-EQ-Cookbook.txt): analogue
// prototypes by the bilinear transform, warped at frequency_hz.
//
// A = 10^(gain_db / 40), w0 = 2 pi frequency_hz / rate_hz, and alpha = sin(w0) / (2 q), or sin(w0) sinh(ln 2 / 2 times
// bandwidth_octaves times w0 / sin w0), or sin(w0) / 2 sqrt((A + 1/A)(1/slope - 1) + 2). Gains: low-pass and high-pass
// have q at frequency_hz; band-pass 1, its skirt form q; peaking gain_db; shelves half of it. The notch is a kind of
// its own (corner.hpp).
#pragma once

#include "oracle/filters/filter.hpp"

namespace halflsb {

enum class EqualiserType { low_pass, high_pass, band_pass, band_pass_skirt, all_pass, peaking, low_shelf, high_shelf };
enum class EqualiserWidth { q, bandwidth_octaves, shelf_slope };

struct EqualiserDesign {
    EqualiserType type = EqualiserType::peaking;
    double frequency_hz = 0.0, rate_hz = 1.0;  ///< 0 < frequency_hz < rate_hz / 2
    EqualiserWidth width_is = EqualiserWidth::q;
    double width = 1.0;    ///< above 0; a slope at most steepest_slope
    double gain_db = 0.0;  ///< of peaking and shelves
};

/// The largest shelf_slope for which alpha is a real number: 1 / (1 - 2 / (A + 1/A)); infinite at 0 dB. At slopes up to
/// 1 the shelf is monotonic.
double steepest_slope(double gain_db);

BiquadSection designed_section(const EqualiserDesign& design);

}  // namespace halflsb
