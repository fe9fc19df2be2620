// What a stage can still return of the past: constants of the bound in impulse_run.hpp.
#pragma once

#include <cstddef>
#include <deque>
#include <span>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// sum |coming y| <= gain sum |coming x| + of_past_in sum |past x| + of_past_out sum |past y|, the past being the
/// last `samples` samples, of the input and of the output. True for any input; infinite where a pole is too near the
/// unit circle to tell.
struct Memory {
    double gain = 1.0, of_past_in = 0.0, of_past_out = 0.0;
    std::size_t samples = 0;
};

/// FIR: the sum of |taps| thrice over. A section: that of 1/A(z), which is at most (poles r e^(+-j theta), or p and
/// q) min(1 / (1 - r)^2, 1 / ((1 - r) sin theta)), or 1 / ((1 - |p|)(1 - |q|)), times |b| and |a|. A comb: a
/// geometric series in |feedback|. What changes the rate is an FIR of its taps, or of its gain: fewer outputs sum to
/// less, and zeros that are put in add nothing. A recursion: run until its state, from any start, has halved.
Memory memory_of(const MovingAverage& design);
Memory memory_of(const Fir& design);
Memory memory_of(const BiquadSection& design);
Memory memory_of(const Comb& design);
Memory memory_of(const Recursion& design);
Memory memory_of(const CicDecimator& design);
Memory memory_of(const CicInterpolator& design);
Memory memory_of(const FirDecimator& design);
Memory memory_of(const FirInterpolator& design);

/// gain times amount, where no amount is none even of an infinite gain.
double share(double gain, double amount);

/// The sum of |x| over at least the last `samples` samples, and at most a piece or a sixteenth more.
class PastSum {
public:
    explicit PastSum(std::size_t samples) : samples_(samples) {}
    void add(std::span<const double> piece);
    double value() const { return value_; }

private:
    struct Part {
        std::size_t count;
        double sum;
    };
    std::size_t samples_;
    std::deque<Part> parts_;  ///< the newest last
    std::size_t count_ = 0;   ///< of all parts
    double value_ = 0.0;
};

}  // namespace halflsb
