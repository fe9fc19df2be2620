// Numbers of about 106 bits as the sum of two doubles (Dekker 1971; Hida, Li and Bailey 2001), for the polynomials of
// a recursion, whose coefficients cancel in all 53. Error of each operation: a few 2^-104 of the result. Only + - * /
// and fma are used: the same bits on every machine.
#pragma once

#include <cmath>

#include "oracle/filters/exact_sums.hpp"

namespace halflsb {

struct DoubleDouble {
    double high = 0.0, low = 0.0;  ///< the value is their sum; |low| <= half an ulp of high

    DoubleDouble() = default;
    DoubleDouble(double value) : high(value) {}
    /// high + low, |low| small against |high| (Dekker 1971).
    static DoubleDouble of_sum(double high, double low) {
        DoubleDouble sum;
        sum.high = high + low;
        sum.low = low - (sum.high - high);
        return sum;
    }
};

inline DoubleDouble operator+(const DoubleDouble& a, const DoubleDouble& b) {
    const double high = a.high + b.high, low = a.low + b.low;
    const DoubleDouble first = DoubleDouble::of_sum(high, sum_error(a.high, b.high, high) + low);
    return DoubleDouble::of_sum(first.high, first.low + sum_error(a.low, b.low, low));
}

inline DoubleDouble operator-(const DoubleDouble& a) {
    DoubleDouble negative;
    negative.high = -a.high;
    negative.low = -a.low;
    return negative;
}

inline DoubleDouble operator-(const DoubleDouble& a, const DoubleDouble& b) { return a + -b; }

inline DoubleDouble operator*(const DoubleDouble& a, const DoubleDouble& b) {
    const double product = a.high * b.high;
    const double error = std::fma(a.high, b.high, -product);
    return DoubleDouble::of_sum(product, error + (a.high * b.low + a.low * b.high));
}

inline DoubleDouble operator/(const DoubleDouble& a, const DoubleDouble& b) {
    const double first = a.high / b.high;
    const DoubleDouble rest = a - b * DoubleDouble(first);
    const double second = rest.high / b.high;
    const DoubleDouble last = rest - b * DoubleDouble(second);
    return DoubleDouble::of_sum(first, second) + DoubleDouble(last.high / b.high);
}

inline double to_double(const DoubleDouble& a) { return a.high + a.low; }

}  // namespace halflsb
