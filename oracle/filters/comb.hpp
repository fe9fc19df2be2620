// A comb: one tap forward and one back at the same delay,
//
//     y[n] = direct x[n] + forward x[n-D] - feedback y[n-D]
//
// H(z) = (direct + forward z^-D) / (1 + feedback z^-D), D poles of radius |feedback|^(1/D).
//
// Accuracy: three roundings a sample, each of the size of the output, at most 1 / (1 - |feedback|) of them
// in sum. Cost: three multiplications a sample, whatever the delay; 16 bytes of memory a sample of delay.
#pragma once

#include <vector>

#include "oracle/filters/stage_filter.hpp"

namespace halflsb {

class CombFilter final : public StageFilter {
public:
    explicit CombFilter(const Comb& design);
    void reset() override;
    void preload(double value) override;
    void process(std::span<const double> in, std::span<double> out) override;

private:
    Comb design_;
    std::vector<double> past_in_, past_out_;  ///< rings of delay_samples
    std::size_t place_ = 0;                   ///< of the oldest sample, the one that the taps take
};

}  // namespace halflsb
