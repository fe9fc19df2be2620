// The moving average in double precision: a moving sum (moving_sum.hpp) and one division a sample.
//
// Accuracy: |error| <= (points + 1) 2^-53 mean|x| over the window (first order). Where the inputs are multiples
// of an LSB (codes of q7 .. i32) and points <= 65536, each partial sum is below 2^48 LSB, thus exact,
// and the output is the true mean correctly rounded. A NaN is gone after `points` samples.
#pragma once

#include "oracle/filters/moving_sum.hpp"
#include "oracle/filters/stage_filter.hpp"

namespace halflsb {

class MovingAverageFilter final : public StageFilter {
public:
    /// Growing: the first outputs are means of the 1, 2, 3 ... samples so far (Initial::growing).
    explicit MovingAverageFilter(const MovingAverage& design, bool is_growing = false);
    void reset() override;
    void preload(double value) override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    double points_;
    bool is_growing_;
    double held_;  ///< samples in the window; points_ where it does not grow
    MovingSum sum_;
};

}  // namespace halflsb
