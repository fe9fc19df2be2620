#include "oracle/filters/octave_band.hpp"

#include <cmath>

#include "oracle/filters/design_math.hpp"
#include "oracle/filters/recursive_design.hpp"

namespace halflsb {

namespace {

constexpr double farthest_nominal = 1.012;

// 1000 G^(numerator / (2 fraction)), G = 10^(3/10).
double frequency_at(int numerator, int fraction) { return 1000.0 * power_of_ten(3.0 * numerator, 20.0 * fraction); }

double distance(double a, double b) { return a > b ? a / b : b / a; }

}  // namespace

OctaveBand octave_band(int fraction, int index) {
    const int numerator = fraction % 2 == 1 ? 2 * index : 2 * index + 1;
    return {index, frequency_at(numerator, fraction), frequency_at(numerator - 1, fraction),
            frequency_at(numerator + 1, fraction)};
}

NearestBands bands_near(int fraction, double frequency_hz) {
    // log G = 0.3 decades; the estimate is put right by the edges themselves.
    const double steps = std::log10(frequency_hz / 1000.0) / 0.3 * fraction - (fraction % 2 == 1 ? 0.0 : 0.5);
    auto index = static_cast<int>(std::floor(steps));
    while (octave_band(fraction, index).midband_hz > frequency_hz) --index;
    while (octave_band(fraction, index + 1).midband_hz <= frequency_hz) ++index;
    const OctaveBand below = octave_band(fraction, index), above = octave_band(fraction, index + 1);
    if (distance(below.midband_hz, frequency_hz) <= distance(above.midband_hz, frequency_hz)) return {below, above};
    return {above, below};
}

std::optional<OctaveBand> band_of(int fraction, double midband_hz) {
    const OctaveBand nearest = bands_near(fraction, midband_hz).nearest;
    if (distance(nearest.midband_hz, midband_hz) > farthest_nominal) return std::nullopt;
    return nearest;
}

std::vector<BiquadSection> octave_band_sections(const OctaveBand& band, int order, double rate_hz) {
    RecursiveDesign design;
    design.shape = ResponseShape::band_pass;
    design.order = order;
    design.lower_hz = band.lower_hz;
    design.upper_hz = band.upper_hz;
    design.rate_hz = rate_hz;
    return designed_sections(design);
}

}  // namespace halflsb
