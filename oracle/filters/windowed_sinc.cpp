#include "oracle/filters/windowed_sinc.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/design_math.hpp"

namespace halflsb {

namespace {

constexpr double least_gain = 1e-6;

// I0(x) = sum (x / 2)^(2 k) / k!^2: all terms are positive.
double bessel_i0(double x) {
    const double square = 0.25 * x * x;
    double term = 1.0, sum = 1.0;
    for (int k = 1; term > 0x1p-60 * sum; ++k) {
        term *= square / (static_cast<double>(k) * k);
        sum += term;
    }
    return sum;
}

double window_at(const WindowedSinc& design, int n) {
    const int steps = design.taps - 1;
    if (steps == 0 || design.window == Window::rectangular) return 1.0;
    const double once = sine_cosine(n, steps).cosine;
    switch (design.window) {
        case Window::hann:
            return 0.5 - 0.5 * once;
        case Window::hamming:
            return 0.54 - 0.46 * once;
        case Window::blackman:
            return (0.42 - 0.5 * once) + 0.08 * sine_cosine(2.0 * n, steps).cosine;
        default: {
            // 1 - (2 n / steps - 1)^2 = 4 n (steps - n) / steps^2
            const double root = 2.0 * std::sqrt(static_cast<double>(n) * (steps - n)) / steps;
            return bessel_i0(design.kaiser_beta * root) / bessel_i0(design.kaiser_beta);
        }
    }
}

// 2 f sinc(2 f m) for f = corner_hz / rate_hz, twice_m being 2 m, a whole number.
double ideal_tap(double corner_hz, double rate_hz, int twice_m) {
    if (twice_m == 0) return 2.0 * corner_hz / rate_hz;
    // sin(2 pi f m): corner_hz times |2 m| below 2^17 is a product that may round; the quotient keeps it all.
    const double count = std::abs(twice_m);
    const double high = corner_hz * count, low = std::fma(corner_hz, count, -high);
    const auto [sine, cosine] = sine_cosine(high, 2.0 * rate_hz);
    const double angle = pi_in_designs * low / rate_hz;  // what the rounded product lost: below 1e-11
    return 2.0 * (sine + angle * cosine) / (pi_in_designs * count);
}

// That of the whole rate: sin(pi m) / (pi m), which is 0 at whole m.
double all_pass_tap(int twice_m) {
    if (twice_m == 0) return 1.0;
    if (twice_m % 2 == 0) return 0.0;
    const int count = std::abs(twice_m);
    return (count % 4 == 1 ? 2.0 : -2.0) / (pi_in_designs * count);
}

double tap_at(const WindowedSinc& design, int twice_m) {
    const double lower = ideal_tap(design.lower_hz, design.rate_hz, twice_m);
    switch (design.shape) {
        case ResponseShape::low_pass:
            return lower;
        case ResponseShape::high_pass:
            return all_pass_tap(twice_m) - lower;
        case ResponseShape::band_pass:
            return ideal_tap(design.upper_hz, design.rate_hz, twice_m) - lower;
        default:
            return lower + (all_pass_tap(twice_m) - ideal_tap(design.upper_hz, design.rate_hz, twice_m));
    }
}

// cos(2 pi f m) at the frequency where the gain is made 1.
double cosine_at_reference(const WindowedSinc& design, int twice_m) {
    const double count = std::abs(twice_m);
    if (design.shape == ResponseShape::high_pass) return sine_cosine(count, 4.0).cosine;
    if (design.shape == ResponseShape::band_pass) {
        return sine_cosine(0.5 * (design.lower_hz + design.upper_hz) * count, 2.0 * design.rate_hz).cosine;
    }
    return 1.0;
}

}  // namespace

bool is_type_2(const WindowedSinc& design) {
    return design.taps % 2 == 0 &&
           (design.shape == ResponseShape::high_pass || design.shape == ResponseShape::band_stop);
}

Fir designed_taps(const WindowedSinc& design) {
    Fir fir;
    fir.taps.resize(static_cast<std::size_t>(design.taps));
    double gain = 0.0, size = 0.0;
    for (int n = 0; 2 * n < design.taps; ++n) {
        const int twice_m = 2 * n - (design.taps - 1);
        const double tap = tap_at(design, twice_m) * window_at(design, n);
        const double count = twice_m == 0 ? 1.0 : 2.0;
        gain += count * tap * cosine_at_reference(design, twice_m);
        size += count * std::fabs(tap);
        fir.taps[static_cast<std::size_t>(n)] = fir.taps[static_cast<std::size_t>(design.taps - 1 - n)] = tap;
    }
    if (!(gain > least_gain * size)) return Fir{};
    for (double& tap : fir.taps) tap /= gain;
    return fir;
}

}  // namespace halflsb
