// CIC decimator and interpolator, without integrators: N moving sums of R M samples at the higher rate give the same
// output as N integrators and N combs (Hogenauer 1981), whose integrators grow without end and, in double precision,
// would lose their low bits.
//
// Accuracy: whole multiples of an LSB come out exact while the sum of all that a window holds, gain times the largest
// input, stays below 2^53 LSB, but for the one division at the end; else |error| <= N R M 2^-53 of that (first order).
// Cost: 2 N additions a sample of the higher rate.
#pragma once

#include <vector>

#include "oracle/filters/filter.hpp"
#include "oracle/filters/moving_sum.hpp"

namespace halflsb {

class CicDecimatorFilter final : public Filter {
public:
    explicit CicDecimatorFilter(const CicDecimator& design);
    void reset() override;
    std::size_t outputs_for(std::size_t inputs) const override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    std::size_t factor_, phase_;
    double divisor_;
    std::vector<MovingSum> sums_;
    std::size_t until_output_;  ///< inputs that come before the one that gives the next output
    std::vector<double> scratch_;
};

class CicInterpolatorFilter final : public Filter {
public:
    explicit CicInterpolatorFilter(const CicInterpolator& design);
    void reset() override;
    std::size_t outputs_for(std::size_t inputs) const override { return inputs * factor_; }
    void process(std::span<const double> in, std::span<double> out) override;

private:
    std::size_t factor_;
    double divisor_;
    std::vector<MovingSum> sums_;
};

/// R M, the length of each moving sum.
template <class Cic>
int window_of(const Cic& design) {
    return design.factor * design.delay_samples;
}
/// (R M)^N, the gain of the sums at zero frequency; exact up to 2^53.
template <class Cic>
double gain_of_sums(const Cic& design) {
    double product = 1.0;
    for (int i = 0; i < design.order; ++i) product *= window_of(design);
    return product;
}
/// What the sums are divided by: 2^shift_bits, or the gain at zero frequency.
double divisor_of(const CicDecimator& design);
double divisor_of(const CicInterpolator& design);

/// Outputs of a decimator for `inputs` samples, of which the first until_output give none.
inline std::size_t decimated_count(std::size_t inputs, std::size_t until_output, std::size_t factor) {
    return inputs <= until_output ? 0 : (inputs - until_output - 1) / factor + 1;
}

}  // namespace halflsb
