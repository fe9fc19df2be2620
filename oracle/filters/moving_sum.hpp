// The sum of the last samples, without drift and at a constant cost per sample.
//
// The obvious running sum (add the newest, subtract the oldest) keeps every rounding error for ever
// and never gets rid of a NaN. Here the samples are cut, by their index, into stretches of `points`;
// each window is then a tail of the stretch before and a head of the present one, and both come from
// sums that start at zero within a stretch (van Herk 1992, Gil and Werman 1993, who do this for the
// running maximum). Two additions a sample.
//
// Accuracy: a sum takes at most points - 1 additions, whatever the length of the record, so |error| <= (points - 1)
// 2^-53 sum |x| over the window (first order). Where the inputs are whole multiples of an LSB and the sum of their
// sizes stays below 2^53 LSB, it is exact. A NaN is gone after `points` samples.
#pragma once

#include <span>
#include <vector>

namespace halflsb {

class MovingSum {
public:
    /// points >= 1; 16 bytes of memory a point.
    explicit MovingSum(std::size_t points);
    void reset();
    /// After a reset: as if every sample before had been `value`.
    void preload(double value);
    /// One for one; the spans are equal or do not overlap.
    void process(std::span<const double> in, std::span<double> out);

private:
    void finish_stretch();

    std::vector<double> stretch_;  ///< samples of the present stretch
    std::vector<double> tails_;    ///< tails_[j]: sum of the stretch before from its element j on
    std::size_t filled_ = 0;
    double head_ = 0.0;  ///< sum of the present stretch so far
};

}  // namespace halflsb
