#include "oracle/filters/design_math.hpp"

#include <cmath>

#include "stimuli/exact_math.hpp"
#include "stimuli/wide.hpp"

namespace halflsb {

namespace {

// 2^x for x = whole + fraction, the fraction in units of 2^-128.
double power_of_split(int whole, Uint128 fraction) {
    return std::ldexp(static_cast<double>(exp2_of_fraction(fraction)), whole - 127);
}

// 2^|octaves| or, where `falls`, 2^-|octaves|.
double power_of_octaves(const Wide& octaves, bool falls) {
    const Split parts = split({0, octaves.mantissa}, -octaves.exponent);
    const auto whole = static_cast<int>(parts.whole);
    if (!falls) return power_of_split(whole, parts.fraction);
    if (parts.fraction == 0) return std::ldexp(1.0, -whole);
    return power_of_split(-whole - 1, Uint128{0} - parts.fraction);
}

}  // namespace

SineCosine sine_cosine(double numerator, double denominator) {
    const Wide turns = wide(numerator) / wide(denominator);
    const TurnFraction phase = split({0, turns.mantissa}, -turns.exponent).fraction;
    return {sine_of_turns(phase), cosine_of_turns(phase)};
}

double warped(double frequency_hz, double rate_hz) {
    const auto [sine, cosine] = sine_cosine(frequency_hz, 2.0 * rate_hz);
    return sine / cosine;
}

double exponential(double x) { return power_of_octaves(wide(std::fabs(x)) / natural_log_of_two(), x < 0.0); }

double power_of_ten(double numerator, double denominator) {
    const Wide decades = wide(std::fabs(numerator)) / wide(denominator);
    return power_of_octaves(decades * (natural_log(wide(10.0)) / natural_log_of_two()), numerator < 0.0);
}

double power(double base, double x) {
    const bool below_one = base < 1.0;
    const Wide log = natural_log(below_one ? wide(1.0) / wide(base) : wide(base));
    return power_of_octaves(wide(std::fabs(x)) * log / natural_log_of_two(), below_one != (x < 0.0));
}

double hyperbolic_sine(double x) {
    if (std::fabs(x) > 0.5) {
        const double e = exponential(std::fabs(x));
        return std::copysign(0.5 * (e - 1.0 / e), x);
    }
    // x + x^3 / 3! + ...: at 1/2 the eighth term is below 2^-55 of the first.
    double term = x, sum = 0.0;
    for (int n = 1; n <= 8; ++n) {
        sum += term;
        term *= x * x / (2.0 * n * (2.0 * n + 1.0));
    }
    return sum;
}

double inverse_hyperbolic_sine(double x) {
    const double size = std::fabs(x);
    // Of 2^-26 and less the cube is beyond the last digit.
    if (size < 0x1p-26) return x;
    // ln(1 + y), y = size + size^2 / (1 + sqrt(1 + size^2)), as y ln(u) / (u - 1) with u the rounded 1 + y (Kahan).
    const double y = size + size * size / (1.0 + std::sqrt(1.0 + size * size)), u = 1.0 + y;
    return std::copysign(natural_log(u) * (y / (u - 1.0)), x);
}

Complex square_root(Complex a) {
    const double size = std::sqrt(square_of_size(a));
    if (size == 0.0) return {};
    const double larger = std::sqrt(0.5 * (size + std::fabs(a.re)));
    const double smaller = 0.5 * a.im / larger;
    if (a.re >= 0.0) return {larger, smaller};
    return {std::fabs(smaller), std::copysign(larger, a.im)};
}

}  // namespace halflsb
