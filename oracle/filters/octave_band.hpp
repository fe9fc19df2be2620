// Octave and fractional-octave bands as IEC 61260-1 numbers them, and the Butterworth band-pass between their edges.
//
// Base ten: G = 10^(3/10). Bands of 1/b octave have their exact mid-bands at 1000 G^(x / b) Hz for odd b and at
// 1000 G^((2 x + 1) / (2 b)) Hz for even b, and their edges a factor G^(1 / (2 b)) below and above. x counts from
// the band at or next above 1 kHz.
#pragma once

#include <optional>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

struct OctaveBand {
    int index = 0;
    double midband_hz = 1000.0, lower_hz = 0.0, upper_hz = 0.0;
};

/// Band `index` of 1/fraction octave, fraction 1 .. 24.
OctaveBand octave_band(int fraction, int index);

/// The bands whose mid-bands are next to a frequency: the nearest one in ratio first, then its neighbour on the other
/// side of the frequency.
struct NearestBands {
    OctaveBand nearest, other;
};
NearestBands bands_near(int fraction, double frequency_hz);

/// The band that a midband stands for, exact or nominal: nominal ones (31.5, 160, 1600 ...) lie within 1 percent of the
/// exact ones. nullopt where the nearest is farther than 1.2 percent; half a step of 1/24 octave is 1.4.
std::optional<OctaveBand> band_of(int fraction, double midband_hz);

/// Sections of the Butterworth band-pass of that order (2 order poles), -3.01 dB at both edges; upper_hz below half
/// the rate.
std::vector<BiquadSection> octave_band_sections(const OctaveBand& band, int order, double rate_hz);

}  // namespace halflsb
