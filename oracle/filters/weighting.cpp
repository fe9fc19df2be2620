#include "oracle/filters/weighting.hpp"

#include <cmath>

#include "oracle/filters/design_math.hpp"
#include "oracle/filters/exact_sums.hpp"

namespace halflsb {

namespace {

// IEC 61672-1, annex E: from f_r = 1000, f_L = 10^1.5, f_H = 10^3.9, f_A = 10^2.45 Hz and D^2 = 1/2, to the last digit
// of a double (the standard prints 20.60, 107.7, 737.9 and 12194 Hz).
constexpr double f1_hz = 20.598997057568145, f2_hz = 107.65264864304628, f3_hz = 737.8622307362899,
                 f4_hz = 12194.21714799801;
constexpr double reference_hz = 1000.0;

// What reproduces the tables of BS.1770 at 48 kHz: to 1e-14.
constexpr double table_rate_hz = 48000.0;
constexpr double shelf_hz = 1681.974450955533, shelf_gain_db = 3.999843853973347, shelf_q = 0.7071752369554196,
                 shelf_exponent = 0.4996667741545416;
constexpr double high_pass_hz = 38.13547087602444, high_pass_q = 0.5003270373238773;

// (s + w1)(s + w2) with w = pi f / fs in the unit of s = (1 - z^-1) / (1 + z^-1): poles (1 - w) / (1 + w).
BiquadSection two_poles(double first_hz, double second_hz, double rate_hz) {
    const double w1 = pi_in_designs * first_hz / rate_hz, w2 = pi_in_designs * second_hz / rate_hz;
    const double scale = (1.0 + w1) * (1.0 + w2);
    BiquadSection s;
    s.a1 = 2.0 * (w1 * w2 - 1.0) / scale;
    s.a2 = (1.0 - w1) * (1.0 - w2) / scale;
    return s;
}

BiquadSection with_zeros(BiquadSection s, double at) {
    s.b0 = s.b2 = 1.0;
    s.b1 = -2.0 * at;
    return s;
}

// |p0 + p1 z^-1 + p2 z^-2|^2 at the sine s and cosine c of half the angle: near zero frequency nothing cancels.
double square_of_polynomial(double p0, double p1, double p2, SineCosine half) {
    const double real = sum_of_three(p0, p1, p2) - 2.0 * (p0 + p2) * half.sine * half.sine;
    const double imaginary = 2.0 * (p0 - p2) * half.sine * half.cosine;
    return real * real + imaginary * imaginary;
}

std::vector<BiquadSection> a_or_c(WeightingCurve curve, double rate_hz) {
    std::vector<BiquadSection> sections{with_zeros(two_poles(f4_hz, f4_hz, rate_hz), -1.0)};
    if (curve == WeightingCurve::a) sections.push_back(with_zeros(two_poles(f3_hz, f2_hz, rate_hz), 1.0));
    sections.push_back(with_zeros(two_poles(f1_hz, f1_hz, rate_hz), 1.0));
    const SineCosine half = sine_cosine(reference_hz, 2.0 * rate_hz);
    double square = 1.0;
    for (const BiquadSection& s : sections) {
        square *= square_of_polynomial(s.b0, s.b1, s.b2, half) / square_of_polynomial(1.0, s.a1, s.a2, half);
    }
    const double gain = 1.0 / std::sqrt(square);
    for (double* b : {&sections[0].b0, &sections[0].b1, &sections[0].b2}) *b *= gain;
    return sections;
}

BiquadSection shelf_of_k(double rate_hz) {
    const double k = warped(shelf_hz, rate_hz), square = k * k, high = ratio_of_db(shelf_gain_db);
    const double band = power(high, shelf_exponent), a0 = 1.0 + k / shelf_q + square;
    return {(high + band * k / shelf_q + square) / a0, 2.0 * (square - high) / a0,
            (high - band * k / shelf_q + square) / a0, 2.0 * (square - 1.0) / a0, (1.0 - k / shelf_q + square) / a0};
}

double scale_of_high_pass(double k) { return 1.0 + k / high_pass_q + k * k; }

BiquadSection high_pass_of_k(double rate_hz) {
    const double k = warped(high_pass_hz, rate_hz), a0 = scale_of_high_pass(k);
    const double gain = scale_of_high_pass(warped(high_pass_hz, table_rate_hz)) / a0;
    return {gain, -2.0 * gain, gain, 2.0 * (k * k - 1.0) / a0, (1.0 - k / high_pass_q + k * k) / a0};
}

double level(double amplitude) { return 20.0 * std::log10(amplitude); }

double unscaled_goal(WeightingCurve curve, double f) {
    const double square = f * f;
    const double c = square / ((square + f1_hz * f1_hz) * (square + f4_hz * f4_hz));
    if (curve == WeightingCurve::c) return c;
    return c * square / std::sqrt((square + f2_hz * f2_hz) * (square + f3_hz * f3_hz));
}

}  // namespace

double least_weighting_rate_hz(WeightingCurve curve) {
    return curve == WeightingCurve::k ? 2.0 * shelf_hz : 2.0 * reference_hz;
}

std::vector<BiquadSection> weighting_sections(WeightingCurve curve, double rate_hz) {
    if (curve != WeightingCurve::k) return a_or_c(curve, rate_hz);
    if (rate_hz == table_rate_hz) {
        return {{1.53512485958697, -2.69169618940638, 1.19839281085285, -1.69065929318241, 0.73248077421585},
                {1.0, -2.0, 1.0, -1.99004745483398, 0.99007225036621}};
    }
    return {shelf_of_k(rate_hz), high_pass_of_k(rate_hz)};
}

double weighting_goal_db(WeightingCurve curve, double frequency_hz) {
    return level(unscaled_goal(curve, frequency_hz) / unscaled_goal(curve, reference_hz));
}

}  // namespace halflsb
