// FIR in direct form: y[n] = taps[0] x[n] + taps[1] x[n-1] + ..., summed in this order for each
// output, so the bits do not depend on how the input is split or on the width of the vector unit.
//
// Accuracy: |error| <= N 2^-53 sum |taps[k] x[n-k]| for N taps (first order). Cost: N multiply-adds a
// sample, four to six of them in a nanosecond when blocks hold 16 samples or more.
#pragma once

#include <vector>

#include "oracle/filters/sample_line.hpp"
#include "oracle/filters/stage_filter.hpp"

namespace halflsb {

class FirFilter final : public StageFilter {
public:
    explicit FirFilter(const Fir& design);
    void reset() override;
    void preload(double value) override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    std::vector<double> taps_;
    SampleLine line_;
};

}  // namespace halflsb
