// What a stage can still return of the past: constants of the bound in impulse_run.hpp.
#pragma once

#include <cstddef>
#include <span>
#include <vector>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// sum |coming y| <= gain sum |coming x| + of_past_in sum |past x| + of_past_out sum |past y|, the past being the
/// last `samples` samples. True for any input; infinite where a pole is too near the unit circle to tell.
struct Memory {
    double gain = 1.0, of_past_in = 0.0, of_past_out = 0.0;
    std::size_t samples = 0;
};

/// FIR: the sum of |taps| thrice over. A section: that of 1/A(z), which is at most (poles r e^(+-j theta), or p and
/// q) min(1 / (1 - r)^2, 1 / ((1 - r) sin theta)), or 1 / ((1 - |p|)(1 - |q|)), times |b| and |a|. A comb: a
/// geometric series in |feedback|.
Memory memory_of(const MovingAverage& design);
Memory memory_of(const Fir& design);
Memory memory_of(const BiquadSection& design);
Memory memory_of(const Comb& design);

/// gain times amount, where no amount is none even of an infinite gain.
double share(double gain, double amount);

/// The sum of |x| over at least the last `samples` samples, and at most a piece more.
class PastSum {
public:
    explicit PastSum(std::size_t samples) : samples_(samples) {}
    /// All pieces have the same size.
    void add(std::span<const double> piece);
    double value() const { return value_; }

private:
    std::size_t samples_;
    std::vector<double> ring_;  ///< sums of pieces, for memories longer than one
    std::size_t place_ = 0;
    double value_ = 0.0;
};

}  // namespace halflsb
