// A recursion by the coefficients of its two polynomials, in direct form, with twice the digits of a double.
//
// The b/a form of a sharp filter of high order is a treacherous one: at order 12 and a low corner the terms of
// sum a[k] y[n-k] are thousands of times their sum, and what each rounding adds stays in the loop for as long as the
// poles ring. Two right programs in double precision then differ in the fourth digit. So each output is a sum of
// products without rounding errors (Ogita, Rump and Oishi 2005, "Accurate sum and dot product"), and what is fed back
// is that sum as two doubles, of some 104 bits.
//
// Accuracy: carried_recursion_loss, in practice half an ulp of the output. Cost: some 15 additions and multiplications
// a coefficient and sample.
#pragma once

#include <vector>

#include "oracle/filters/stage_filter.hpp"

namespace halflsb {

class RecursionFilter final : public StageFilter {
public:
    explicit RecursionFilter(const Recursion& design);
    void reset() override;
    void preload(double value) override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    /// value = high + low, each of at most 26 bits, so that products of them are exact (Veltkamp 1968, Dekker 1971).
    struct Halves {
        Halves() = default;
        explicit Halves(double number);
        double value = 0.0, high = 0.0, low = 0.0;
    };
    struct Output {
        Halves halves;
        double rest = 0.0;  ///< of the output, below its last bit
    };

    double step(const Halves* newest_in, Output* next_out);

    std::vector<Halves> b_, minus_a_;  ///< minus_a_ from a[1] on
    double gain_at_dc_;
    std::vector<Halves> line_in_;   ///< the past and what has come since the last move; the newest last
    std::vector<Output> line_out_;  ///< likewise
    std::size_t past_, place_ = 0;  ///< past_ samples are kept; place_: index in both lines of the next sample
    std::size_t quiet_ = 0;         ///< outputs in a row that have decayed to nothing
};

/// How far the output of a plain double-precision recursion may lie from the true one, for inputs within -1 .. 1:
///     sum |g| x (terms) 2^-53 (sum |b| + sum |a| x sum |h|),
/// g and h the impulse responses of 1 / A(z) and of the filter, terms the number of products: every rounding of the
/// sum has at most the size of its terms, and reaches the output through 1 / A(z) (Higham 2002, Accuracy and Stability
/// of Numerical Algorithms, chapter 3, for the sum). First order in 2^-53. Infinite where the poles are too near the
/// unit circle to tell. It is a bound: what is seen is some 10 to 1000 times less.
double recursion_loss(const Recursion& design);

/// The same of RecursionFilter: 2^-53 sum |h| for the rounding of the output, and the above with 2^-102.
double carried_recursion_loss(const Recursion& design);

}  // namespace halflsb
