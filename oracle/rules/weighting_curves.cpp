#include "oracle/rules/weighting_curves.hpp"

#include <cmath>
#include <complex>
#include <numbers>

namespace halflsb {
namespace {

/// Pole frequencies in Hz: IEC 61672-1:2013, 5.4 and annex E, as two public transcriptions have them (not the primary
/// text): f_r = 1000, f_L = 10^1.5, f_H = 10^3.9, f_A = 10^2.45, D^2 = 1/2. The standard prints them as 20.60, 107.7,
/// 737.9 and 12194.
struct Poles {
    double f1, f2, f3, f4;
};

Poles poles() {
    const double r2 = 1e6, l2 = std::pow(10.0, 3.0), h2 = std::pow(10.0, 7.8), a = std::pow(10.0, 2.45);
    const double d = std::sqrt(0.5), c = l2 * h2;
    const double b = (r2 + c / r2 - d * (l2 + h2)) / (1.0 - d);
    const double root = std::sqrt(b * b - 4.0 * c), five = std::sqrt(5.0);
    return {std::sqrt((-b - root) / 2.0), (3.0 - five) / 2.0 * a, (3.0 + five) / 2.0 * a, std::sqrt((-b + root) / 2.0)};
}

double c_ratio(const Poles& p, double hz) {
    const double f2 = hz * hz;
    return p.f4 * p.f4 * f2 / ((f2 + p.f1 * p.f1) * (f2 + p.f4 * p.f4));
}

double a_ratio(const Poles& p, double hz) {
    const double f2 = hz * hz;
    return c_ratio(p, hz) * f2 / std::sqrt((f2 + p.f2 * p.f2) * (f2 + p.f3 * p.f3));
}

struct Section {
    double b0, b1, b2, a1, a2;
};

double section_gain(const Section& s, double cycles_per_sample) {
    const std::complex<double> z1 = std::polar(1.0, -2.0 * std::numbers::pi * cycles_per_sample), z2 = z1 * z1;
    return std::abs((s.b0 + s.b1 * z1 + s.b2 * z2) / (1.0 + s.a1 * z1 + s.a2 * z2));
}

/// ITU-R BS.1770-4, annex 1, tables 1 and 2, as public transcriptions have them (not the primary text).
double k_ratio(double hz) {
    constexpr Section pre_filter{1.53512485958697, -2.69169618940638, 1.19839281085285, -1.69065929318241,
                                 0.73248077421585};
    constexpr Section rlb{1.0, -2.0, 1.0, -1.99004745483398, 0.99007225036621};
    constexpr double rate_hz = 48000.0;
    return section_gain(pre_filter, hz / rate_hz) * section_gain(rlb, hz / rate_hz);
}

}  // namespace

double nominal_db(NominalCurve curve, double hz) {
    const Poles p = poles();
    double ratio = 1.0;
    switch (curve) {
        case NominalCurve::none:
            return 0.0;
        case NominalCurve::a_weighting:
            ratio = a_ratio(p, hz) / a_ratio(p, 1000.0);
            break;
        case NominalCurve::c_weighting:
            ratio = c_ratio(p, hz) / c_ratio(p, 1000.0);
            break;
        case NominalCurve::k_weighting:
            ratio = k_ratio(hz);
            break;
    }
    return 20.0 * std::log10(ratio);
}

}  // namespace halflsb
