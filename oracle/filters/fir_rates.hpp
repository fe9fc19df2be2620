// FIR decimator and interpolator, at the cost of what they return: no sample that is dropped is computed, and no zero
// that is put in is multiplied.
//
// Accuracy and order of summation are those of FirFilter (fir.hpp): a decimator returns the same bits as every
// factor-th output of the FIR, an interpolator sums the taps of its phase in rising order.
#pragma once

#include <vector>

#include "oracle/filters/fir.hpp"
#include "oracle/filters/stage_filter.hpp"

namespace halflsb {

class FirDecimatorFilter final : public StageFilter {
public:
    explicit FirDecimatorFilter(const FirDecimator& design);
    void reset() override;
    void preload(double value) override;
    std::size_t outputs_for(std::size_t inputs) const override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    std::vector<double> taps_;
    std::size_t factor_, phase_;
    SampleLine line_;
    std::size_t until_output_;  ///< inputs that come before the one that gives the next output
};

class FirInterpolatorFilter final : public StageFilter {
public:
    explicit FirInterpolatorFilter(const FirInterpolator& design);
    void reset() override;
    void preload(double value) override;
    std::size_t outputs_for(std::size_t inputs) const override { return inputs * phases_.size(); }
    void process(std::span<const double> in, std::span<double> out) override;

private:
    std::vector<FirFilter> phases_;  ///< phase p has the taps p, p + factor, p + 2 factor ...
    std::vector<double> scratch_;
};

}  // namespace halflsb
