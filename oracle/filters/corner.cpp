#include "oracle/filters/corner.hpp"

#include <cmath>

#include "stimuli/exact_math.hpp"
#include "stimuli/wide.hpp"

namespace halflsb {

namespace {

Wide two_pi() {
    constexpr Uint128 digits = Uint128{0xc90fdaa22168c234} << 64 | Uint128{0xc4c6628b80dc1cd1};  // pi 2^126
    return wide_scaled(digits, -125);
}

// 1 - 2^-octaves, for octaves that are not negative. In units of 2^-128, so that nothing cancels: the error is
// some 2^-122, and the least coefficient of a plan is 2^-30.
double one_minus_power(const Wide& octaves) {
    if (octaves.exponent > 0) return 1.0;  // 2^127 octaves and more
    const Split parts = split({0, octaves.mantissa}, -octaves.exponent);
    if (parts.whole > 127) return 1.0;
    const auto whole = static_cast<int>(parts.whole);
    if (parts.fraction == 0) return 1.0 - std::ldexp(1.0, -whole);
    // 2^-(whole + fraction) = 2^(1 - fraction) 2^-(whole + 1); the table's unit is 2^-127.
    const Uint128 power = exp2_of_fraction(Uint128{0} - parts.fraction) >> whole;
    return std::ldexp(static_cast<double>(Uint128{0} - power), -128);
}

}  // namespace

double smoothing_of_corner(double corner_hz, double rate_hz) {
    return one_minus_power(two_pi() * (wide(corner_hz) / wide(rate_hz)) / natural_log_of_two());
}

double smoothing_of_time_constant(double time_constant_s, double rate_hz) {
    return one_minus_power(wide(1.0) / (wide(time_constant_s) * wide(rate_hz)) / natural_log_of_two());
}

BiquadSection notch_section(double frequency_hz, double q, double rate_hz) {
    const Wide turns = wide(frequency_hz) / wide(rate_hz);
    const TurnFraction phase = split({0, turns.mantissa}, -turns.exponent).fraction;
    const double alpha = sine_of_turns(phase) / (2.0 * q), a0 = 1.0 + alpha;
    BiquadSection section;
    section.b0 = section.b2 = 1.0 / a0;
    section.b1 = section.a1 = -2.0 * cosine_of_turns(phase) / a0;
    section.a2 = (1.0 - alpha) / a0;
    return section;
}

}  // namespace halflsb
