// Closed forms of the frequency response, each arranged so that nothing cancels where filters are
// most selective: near zero frequency and near half the sample rate.
#include <algorithm>
#include <array>
#include <cmath>
#include <complex>

#include "oracle/filters/exact_sums.hpp"
#include "oracle/filters/filter.hpp"

namespace halflsb {

namespace {

constexpr double pi = 3.14159265358979323846;

// a * b modulo 2, in -1 .. 1, exact but for the last rounding: phases of long filters turn thousands
// of times.
double product_modulo_2(double a, double b) {
    const double product = a * b;
    return std::remainder(product, 2.0) + std::fma(a, b, -product);
}

double sin_pi(double half_turns) {
    const double r = std::remainder(half_turns, 2.0);
    if (std::fabs(r) > 0.5) return std::sin(pi * (std::copysign(1.0, r) - r));
    return std::sin(pi * r);
}

double cos_pi(double half_turns) { return sin_pi(0.5 - std::fabs(std::remainder(half_turns, 2.0))); }

std::complex<double> unit_at_half_turns(double half_turns) { return {cos_pi(half_turns), sin_pi(half_turns)}; }

// sin(pi f M) / (M sin(pi f)), delayed by (M - 1) / 2. Smith, The Scientist and Engineer's Guide to
// Digital Signal Processing, chapter 15.
std::complex<double> response_of(const MovingAverage& design, double f) {
    const double m = design.points;
    const double amplitude = f == 0.0 ? 1.0 : sin_pi(product_modulo_2(f, m)) / (m * sin_pi(f));
    return amplitude * unit_at_half_turns(-product_modulo_2(f, m - 1.0));
}

// sum taps[k] e^(-j 2 pi f k), in stretches whose first factor is computed afresh: error about
// 4 x 2^-53 sum |taps|, however long the filter.
std::complex<double> response_of(const Fir& design, double f) {
    constexpr std::size_t stretch = 64;
    std::array<std::complex<double>, stretch> turn;
    for (std::size_t m = 0; m < stretch; ++m) {
        turn[m] = unit_at_half_turns(product_modulo_2(-2.0 * f, static_cast<double>(m)));
    }
    double real = 0.0, imaginary = 0.0;
    for (std::size_t first = 0; first < design.taps.size(); first += stretch) {
        const std::size_t count = std::min(stretch, design.taps.size() - first);
        double re = 0.0, im = 0.0;
        for (std::size_t m = 0; m < count; ++m) {
            re += design.taps[first + m] * turn[m].real();
            im += design.taps[first + m] * turn[m].imag();
        }
        const auto base = unit_at_half_turns(product_modulo_2(-2.0 * f, static_cast<double>(first)));
        real += re * base.real() - im * base.imag();
        imaginary += re * base.imag() + im * base.real();
    }
    return {real, imaginary};
}

// e^(j w) (p0 + p1 e^(-j w) + p2 e^(-2 j w)) = (p0 + p2) cos w + p1 + j (p0 - p2) sin w. Its real part
// is p0 + p1 + p2 - 2 (p0 + p2) sin^2(w / 2), near half the sample rate
// -(p0 - p1 + p2) + 2 (p0 + p2) cos^2(w / 2).
std::complex<double> centred_polynomial(double p0, double p1, double p2, double f) {
    double real = 0.0;
    if (f < 0.25) {
        const double s = sin_pi(f);
        real = sum_of_three(p0, p1, p2) - 2.0 * (p0 + p2) * s * s;
    } else {
        const double c = cos_pi(f);
        real = 2.0 * (p0 + p2) * c * c - sum_of_three(p0, -p1, p2);
    }
    return {real, (p0 - p2) * sin_pi(2.0 * f)};
}

std::complex<double> response_of(const BiquadCascade& design, double f) {
    std::complex<double> product = 1.0;
    for (const BiquadSection& s : design.sections) {
        product *= centred_polynomial(s.b0, s.b1, s.b2, f) / centred_polynomial(1.0, s.a1, s.a2, f);
    }
    return product;
}

// p0 + p1 e^(-j w). Its real part is p0 + p1 - 2 p1 sin^2(w / 2) or, with w = pi + v, p0 - p1 + 2 p1 sin^2(v / 2), of
// which the one is taken where nothing cancels. In half turns: h = w / pi, rest = v / pi.
std::complex<double> two_taps(double p0, double p1, double h, double rest) {
    if ((p0 < 0.0) != (p1 < 0.0)) {
        const double s = sin_pi(0.5 * h);
        return {(p0 + p1) - 2.0 * p1 * s * s, -p1 * sin_pi(h)};
    }
    const double s = sin_pi(0.5 * rest);
    return {(p0 - p1) + 2.0 * p1 * s * s, p1 * sin_pi(rest)};
}

std::complex<double> response_of(const Comb& design, double f) {
    const double delay = design.delay_samples, product = 2.0 * f * delay;
    const double lost = std::fma(2.0 * f, delay, -product);
    // product - 1 is exact but where it is nearer to -1 than to 0, and there nothing hangs on it.
    const double h = std::remainder(product, 2.0) + lost, rest = std::remainder(product - 1.0, 2.0) + lost;
    return two_taps(design.direct, design.forward, h, rest) / two_taps(1.0, design.feedback, h, rest);
}

}  // namespace

std::complex<double> response_at(const FilterChain& chain, double cycles_per_sample) {
    std::complex<double> product = 1.0;
    for (const FilterStage& stage : chain) {
        product *= std::visit([&](const auto& design) { return response_of(design, cycles_per_sample); }, stage.design);
    }
    return product;
}

}  // namespace halflsb
