// Phases counted in turns (cycles), so that they stay true in long records.
#pragma once

#include <cmath>
#include <complex>
#include <numbers>

namespace halflsb {

/// a * b less the nearest whole number, exact but for the last rounding.
inline double turns_modulo_1(double a, double b) {
    const double product = a * b;
    return std::remainder(product, 1.0) + std::fma(a, b, -product);
}

inline std::complex<double> unit_of_turns(double turns) {
    const double angle = 2.0 * std::numbers::pi * turns;
    return {std::cos(angle), std::sin(angle)};
}

}  // namespace halflsb
