// Closed forms of the frequency response, each arranged so that nothing cancels where filters are
// most selective: near zero frequency and near half the sample rate.
#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <limits>

#include "oracle/filters/cic.hpp"
#include "oracle/filters/double_double.hpp"
#include "oracle/filters/exact_sums.hpp"
#include "oracle/filters/filter.hpp"
#include "oracle/filters/rates.hpp"

namespace halflsb {

namespace {

constexpr double pi = 3.14159265358979323846;

// std::remainder(x, 2.0) to the bit, in a fraction of its time: below 2^52 the difference is exact.
double modulo_2(double x) {
    if (std::fabs(x) <= 1.0) return x;
    if (!(std::fabs(x) < 0x1p52)) return std::remainder(x, 2.0);
    const double rest = x - 2.0 * std::nearbyint(0.5 * x);
    return rest == 0.0 ? std::copysign(0.0, x) : rest;
}

// a * b modulo 2, in -1 .. 1, exact but for the last rounding: phases of long filters turn thousands
// of times.
double product_modulo_2(double a, double b) {
    const double product = a * b;
    return modulo_2(product) + std::fma(a, b, -product);
}

double sin_pi(double half_turns) {
    const double r = modulo_2(half_turns);
    if (std::fabs(r) > 0.5) return std::sin(pi * (std::copysign(1.0, r) - r));
    return std::sin(pi * r);
}

double cos_pi(double half_turns) { return sin_pi(0.5 - std::fabs(modulo_2(half_turns))); }

std::complex<double> unit_at_half_turns(double half_turns) { return {cos_pi(half_turns), sin_pi(half_turns)}; }

// sin(pi f M) / (M sin(pi f)), delayed by (M - 1) / 2. Smith, The Scientist and Engineer's Guide to
// Digital Signal Processing, chapter 15.
std::complex<double> response_of(const MovingAverage& design, double f) {
    const double m = design.points;
    const double amplitude = f == 0.0 ? 1.0 : sin_pi(product_modulo_2(f, m)) / (m * sin_pi(f));
    return amplitude * unit_at_half_turns(-product_modulo_2(f, m - 1.0));
}

// Real and imaginary part, in one register of any 64-bit processor.
using Pair = double __attribute__((vector_size(16)));

// sum taps[k] e^(-j 2 pi f k), in stretches whose first factor is computed afresh: error about
// 4 x 2^-53 sum |taps|, however long the filter. Four stretches run side by side, as each waits for its own additions.
std::complex<double> response_of(const Fir& design, double f) {
    constexpr std::size_t stretch = 64;
    std::array<Pair, stretch> turn;
    for (std::size_t m = 0; m < stretch; ++m) {
        const auto unit = unit_at_half_turns(product_modulo_2(-2.0 * f, static_cast<double>(m)));
        turn[m] = Pair{unit.real(), unit.imag()};
    }
    double real = 0.0, imaginary = 0.0;
    const auto add = [&](std::size_t first, Pair sum) {
        const auto base = unit_at_half_turns(product_modulo_2(-2.0 * f, static_cast<double>(first)));
        real += sum[0] * base.real() - sum[1] * base.imag();
        imaginary += sum[0] * base.imag() + sum[1] * base.real();
    };
    std::size_t first = 0;
    for (; first + 4 * stretch <= design.taps.size(); first += 4 * stretch) {
        const double* const taps = design.taps.data() + first;
        Pair s0{}, s1{}, s2{}, s3{};
        for (std::size_t m = 0; m < stretch; ++m) {
            const double t0 = taps[m], t1 = taps[m + stretch], t2 = taps[m + 2 * stretch], t3 = taps[m + 3 * stretch];
            s0 += Pair{t0, t0} * turn[m];
            s1 += Pair{t1, t1} * turn[m];
            s2 += Pair{t2, t2} * turn[m];
            s3 += Pair{t3, t3} * turn[m];
        }
        add(first, s0);
        add(first + stretch, s1);
        add(first + 2 * stretch, s2);
        add(first + 3 * stretch, s3);
    }
    for (; first < design.taps.size(); first += stretch) {
        const std::size_t count = std::min(stretch, design.taps.size() - first);
        Pair sum{};
        for (std::size_t m = 0; m < count; ++m) {
            const double tap = design.taps[first + m];
            sum += Pair{tap, tap} * turn[m];
        }
        add(first, sum);
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

// p0 + p1 z^-1 + ... at z = e^(j w): Horner's rule in some 104 bits, since the terms of a sharp recursion are
// thousands of times their sum. cos w = 1 - 2 sin^2(w / 2), and from the other end of the axis likewise.
std::complex<double> polynomial(const std::vector<double>& p, double f) {
    DoubleDouble cosine;
    if (f < 0.25) {
        const DoubleDouble half(sin_pi(f));
        cosine = DoubleDouble(1.0) - DoubleDouble(2.0) * half * half;
    } else {
        const DoubleDouble half(cos_pi(f));
        cosine = DoubleDouble(2.0) * half * half - DoubleDouble(1.0);
    }
    const DoubleDouble sine(sin_pi(2.0 * f));
    DoubleDouble real, imaginary;
    for (std::size_t k = p.size(); k-- > 0;) {
        const DoubleDouble turned = real * cosine + imaginary * sine + DoubleDouble(p[k]);
        imaginary = imaginary * cosine - real * sine;
        real = turned;
    }
    return {to_double(real), to_double(imaginary)};
}

std::complex<double> response_of(const Recursion& design, double f) {
    return polynomial(design.b, f) / polynomial(design.a, f);
}

std::complex<double> response_of(const Median&, double) {
    constexpr double none = std::numeric_limits<double>::quiet_NaN();
    return {none, none};
}

// The moving average of R M samples, N times over; its gain at zero frequency is 1.
template <class Cic>
std::complex<double> response_of_sums(const Cic& design, double f) {
    const std::complex<double> one = response_of(MovingAverage{window_of(design)}, f);
    std::complex<double> product = gain_of_sums(design) / divisor_of(design);
    for (int i = 0; i < design.order; ++i) product *= one;
    return product;
}

// What comes phase_samples behind the time that an output belongs to is ahead by as much.
std::complex<double> ahead(int samples, double f) { return unit_at_half_turns(product_modulo_2(2.0 * f, samples)); }

std::complex<double> response_of(const CicDecimator& design, double f) {
    return response_of_sums(design, f) * ahead(design.phase_samples, f);
}
std::complex<double> response_of(const FirDecimator& design, double f) {
    return response_of(Fir{design.taps}, f) * ahead(design.phase_samples, f);
}

// f is of the higher rate, and the base image has one factor-th of the input's amplitude.
std::complex<double> response_of(const CicInterpolator& design, double f) {
    return response_of_sums(design, f) / static_cast<double>(design.factor);
}
std::complex<double> response_of(const FirInterpolator& design, double f) {
    return response_of(Fir{design.taps}, f) / static_cast<double>(design.factor);
}

// Beyond 0 .. 1/2, where a rate change puts frequencies.
std::complex<double> response_anywhere(const FilterDesign& design, double f) {
    const double base = std::remainder(f, 1.0);
    const auto response = std::visit([&](const auto& kind) { return response_of(kind, std::fabs(base)); }, design);
    return base < 0.0 ? std::conj(response) : response;
}

}  // namespace

std::complex<double> response_at(const FilterChain& chain, double cycles_per_sample) {
    std::complex<double> product = 1.0;
    for (const FilterStage& stage : chain) {
        // A filter works at the higher one of its two rates.
        const RateRatio ratio = rate_ratio(stage.design);
        cycles_per_sample /= ratio.up;
        product *= response_anywhere(stage.design, cycles_per_sample);
        cycles_per_sample *= ratio.down;
    }
    return product;
}

}  // namespace halflsb
