// The moving average in double precision, without drift and at a constant cost per sample.
//
// The obvious running sum (add the newest, subtract the oldest) keeps every rounding error for ever
// and never gets rid of a NaN. Here the samples are cut, by their index, into stretches of `points`;
// each window is then a tail of the stretch before and a head of the present one, and both come from
// sums that start at zero within a stretch (van Herk 1992, Gil and Werman 1993, who do this for the
// running maximum). Two additions and one division a sample.
//
// Accuracy: a window's sum takes at most points - 1 additions, whatever the length of the record, so
// |error| <= (points + 1) 2^-53 mean|x| over the window (first order). Where the inputs are multiples
// of an LSB (codes of q7 .. i32) and points <= 65536, each partial sum is below 2^48 LSB, thus exact,
// and the output is the true mean correctly rounded. A NaN is gone after `points` samples.
#pragma once

#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

class MovingAverageFilter final : public Filter {
public:
    explicit MovingAverageFilter(const MovingAverage& design);
    void reset() override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    void finish_stretch();

    double points_;
    std::vector<double> stretch_;  ///< samples of the present stretch
    std::vector<double> tails_;    ///< tails_[j]: sum of the stretch before from its element j on
    std::size_t filled_ = 0;
    double head_ = 0.0;  ///< sum of the present stretch so far
};

}  // namespace halflsb
