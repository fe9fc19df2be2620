// What every fit of sines of known frequency needs: their columns over a record, counted from the record's
// middle. Counted so, cosines are even and sines odd: the two are orthogonal whatever the frequency, and all
// inner products are closed forms. Used inside oracle/measure only.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <complex>
#include <cstddef>
#include <span>
#include <vector>

#include "oracle/measure/turns.hpp"

namespace halflsb {

/// The index that time is counted from; half-integer when the length is even.
inline double middle_of(std::size_t samples) { return 0.5 * (static_cast<double>(samples) - 1.0); }

/// visit(n, cosine, sine) of 2 pi f (n - middle) for each n. A stretch turns from its own start by a table, so
/// the error stays at two roundings. Cost: four multiplications a sample.
template <class Visit>
void for_each_turn(double cycles_per_sample, std::size_t samples, Visit visit) {
    constexpr std::size_t stretch = 256;
    std::array<std::complex<double>, stretch> turn;
    for (std::size_t m = 0; m < stretch; ++m) {
        turn[m] = unit_of_turns(turns_modulo_1(cycles_per_sample, static_cast<double>(m)));
    }
    for (std::size_t first = 0; first < samples; first += stretch) {
        const auto base =
            unit_of_turns(turns_modulo_1(cycles_per_sample, static_cast<double>(first) - middle_of(samples)));
        const std::size_t count = std::min(stretch, samples - first);
        for (std::size_t m = 0; m < count; ++m) {
            visit(first + m, base.real() * turn[m].real() - base.imag() * turn[m].imag(),
                  base.real() * turn[m].imag() + base.imag() * turn[m].real());
        }
    }
}

/// Sum of e^(j 2 pi f (n - middle)): sin(pi N f) / sin(pi f), real (Dirichlet's kernel). With an even number of
/// samples it changes sign from one whole f to the next.
double sum_of_turns(double cycles_per_sample, std::size_t samples);

struct SineProducts {
    double cosine = 0.0, sine = 0.0;  ///< sum of sample times column
};
SineProducts products_with(double cycles_per_sample, std::span<const double> samples);

/// A symmetric positive definite system of a few unknowns, factored after its columns are scaled to length 1.
class NormalEquations {
public:
    /// `products` row by row. Not usable when, after scaling, a pivot is below 1e-6: a column is then within
    /// 1/1000 of its length of a mixture of the others.
    explicit NormalEquations(std::vector<double> products, std::size_t unknowns);
    bool usable() const { return usable_; }
    std::vector<double> solve(std::vector<double> right) const;
    /// One entry of the inverse; times the noise's variance it is the covariance of two solutions.
    double inverse(std::size_t row, std::size_t column) const;

private:
    double& at(std::size_t row, std::size_t column) { return factor_[row * unknowns_ + column]; }
    double at(std::size_t row, std::size_t column) const { return factor_[row * unknowns_ + column]; }

    std::size_t unknowns_;
    std::vector<double> factor_, scale_;
    bool usable_ = true;
};

}  // namespace halflsb
