// Whether derived limits notice that a firmware computes otherwise than it promised, with given stimuli.
//
// predict asks it for each plausible change of arithmetic: truncation instead of rounding, each product by itself, a
// narrow accumulator. Where the limits are blind, only `exact` sees it.
#pragma once

#include <span>
#include <string>

#include "oracle/arithmetic/error_bound.hpp"

namespace halflsb {

struct LimitSight {
    bool is_seen = false;
    std::string by;  ///< "largest", "rms" or "bias", the first one that is exceeded; "" when none is
    /// What the changed arithmetic returns, less the declared reference of what was promised, as values; and the
    /// limits.
    double largest = 0.0, rms = 0.0, bias = 0.0;
    ErrorBound limits = {};
    std::int64_t judged = 0;  ///< samples: those before the first that may clip or wrap as promised
};

/// Figures are compared as error rules do, in size: the bias with the larger of its two ends.
/// `codes` as they travel to the board, from rest. use.samples is set to what is judged. Both chains must have twins;
/// else nothing is seen and judged is 0. With `use.noise_like` rms and bias are those of noise until a rail is reached.
LimitSight sight_of(const DescribedChain& promised, const DescribedChain& changed, std::span<const Code> codes,
                    BoundUse use = {});

/// True where sight_of sees it.
bool sees(const DescribedChain& promised, const DescribedChain& changed, std::span<const Code> codes,
          const BoundUse& use = {});

}  // namespace halflsb
