// What is left of the case before in the judged samples of one that does not start from a reset.
#pragma once

#include <cstdint>
#include <optional>

#include "oracle/arithmetic/described.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

/// Bounds in values of the output at gain 1. The filter has taken anything within full scale before.
struct Leftover {
    double largest = 0.0;          ///< full scale times the sum of |h[k]| behind what was waited for
    double rms = 0.0, bias = 0.0;  ///< over the judged samples: the first ones have the most
};

/// All that it hangs on beside the chain and the signal.
struct LeftoverUse {
    Start start = Start::reset;
    std::int64_t start_samples = 0, judged_samples = 0;
    bool operator==(const LeftoverUse&) const = default;
};
LeftoverUse leftover_use(const Plan& plan, const Case& the_case);

/// Nothing after a reset. Else after the case's start_samples zeros, or as many discarded samples. Infinite where no
/// rest of the impulse response is known. Saturation in the case before is not looked at.
Leftover leftover(const DescribedChain& chain, const Plan& plan, const Case& the_case);

/// Samples until no state and no remainder of a stage knows what went before, to the bit; nullopt: never.
std::optional<std::int64_t> samples_to_forget(const DescribedStage& stage);
std::optional<std::int64_t> samples_to_forget(const DescribedChain& chain);

}  // namespace halflsb
