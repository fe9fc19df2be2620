// How far a response in the described arithmetic may lie from the declared reference: largest error, rms and bias, with
// where each comes from. docs/methods.md, "Derived limits", has the formulas and their sources.
//
// Largest error: proven for any input, as long as no node overflows (rail_watch.hpp) and the coefficients are those
// described; of float32 as long as no input is larger than said. Stages start from zeros: what a state that was
// preloaded may be off by is not in it. rms and bias: proven, too, where the stimulus is no noise; where it is, by the
// usual model that remainders are uniform and independent (Widrow 1956; Jackson 1970; Barnes, Tran and Leung 1985),
// exceeded with a probability below alpha. Values are those of the chain's input; `step` is worth an output LSB.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "oracle/arithmetic/rounding_points.hpp"

namespace halflsb {

struct BoundUse {
    std::int64_t samples = 4096;  ///< that are judged
    /// Samples came before them: what these left of errors is in rms and bias. Else all states are zero before.
    bool has_past = false;
    bool noise_like = false;  ///< the stimulus is white noise of input_rms (a value)
    double input_rms = 0.0;
    double largest_input = 0.0;  ///< |value| that the stimulus reaches, for float32; 0: full scale, 1.0 of f32
    double alpha = 1e-6;         ///< that rms or bias is exceeded all the same
};

/// What one point does to the output.
struct BoundTerm {
    std::string name;                                  ///< "stage 1, section 2, sum"
    double step = 1.0;                                 ///< where it shortens, as a value
    double parts = 1.0;                                ///< remainders are multiples of step / parts
    int count = 1;                                     ///< of errors a sample
    std::optional<double> lowest, highest;             ///< of the error there, in steps; none in a stage of float32
    double l1 = 1.0, noise_gain = 1.0, dc_gain = 1.0;  ///< of its path: sum |h|, sum h^2, sum h
    double lower = 0.0, upper = 0.0;                   ///< at the output, as values
    bool is_statistical = false;  ///< the stimulus is noise that stands 6 bits above what is dropped here
    double variance = 0.0;        ///< at the output, where it is
    double bias_lower = 0.0, bias_upper = 0.0;
    std::string formula;  ///< how lower and upper come about, with its source
};

struct ErrorBound {
    double step = 1.0;                ///< an output LSB as a value; meaningless for f32
    double lower = 0.0, upper = 0.0;  ///< of the error; may be infinite
    double rms = 0.0;
    double bias_lower = 0.0, bias_upper = 0.0;
    /// Whatever the stimulus is: what rms and bias are without noise.
    double worst_rms = 0.0, worst_bias_lower = 0.0, worst_bias_upper = 0.0;
    /// Of the bias where something may have been clipped on the way: where a path has both signs, clipping can keep the
    /// errors of one of them, and no mean is then smaller than the largest error.
    double clipped_bias_lower = 0.0, clipped_bias_upper = 0.0;
    /// rms and bias count on noise for every point; false: for some, or all, the worst case stands in them.
    bool is_statistical = false;
    double reference_error = 0.0;  ///< of double precision itself; in lower, upper, rms and bias
    std::vector<BoundTerm> terms;

    double largest() const { return upper > -lower ? upper : -lower; }
    double bias() const { return bias_upper > -bias_lower ? bias_upper : -bias_lower; }
};

ErrorBound derive(const DescribedChain& chain, const BoundUse& use = {});

/// The same of one chain for many uses: what costs, the sums over the paths, is kept for each number of samples.
class BoundDeriver {
public:
    explicit BoundDeriver(DescribedChain chain);
    ~BoundDeriver();
    BoundDeriver(BoundDeriver&&) noexcept;
    BoundDeriver& operator=(BoundDeriver&&) noexcept;

    const DescribedChain& chain() const;
    ErrorBound derive(const BoundUse& use);

private:
    class Paths;
    std::unique_ptr<Paths> paths_;
};

}  // namespace halflsb
