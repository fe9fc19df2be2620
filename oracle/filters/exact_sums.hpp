// Sums in which large terms cancel, with the rounding errors carried along: the result is accurate
// relative to itself, not to its terms. For coefficients of filters with poles or zeros near z = 1.
#pragma once

#include <cmath>

namespace halflsb {

/// a + b = sum + error exactly (Knuth 1969, Moller 1965).
inline double sum_error(double a, double b, double sum) {
    const double b_used = sum - a;
    return (a - (sum - b_used)) + (b - b_used);
}

/// a + b + c, error at most 2^-53 of the result plus 2^-104 of the largest term.
inline double sum_of_three(double a, double b, double c) {
    const double ab = a + b;
    const double abc = ab + c;
    return abc + (sum_error(a, b, ab) + sum_error(ab, c, abc));
}

/// a - b c. std::fma is exact on every machine, in software where the processor has none.
inline double difference_of_product(double a, double b, double c) {
    const double product = b * c;
    const double product_error = std::fma(b, c, -product);
    return sum_of_three(a, -product, -product_error);
}

}  // namespace halflsb
