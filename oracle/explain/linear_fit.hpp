// The linear filter that a board really is, whatever its plan says: least squares over its captures.
//
// y[n] = offset + sum b[k] x[n-k] - sum a[k] y[n-k], with the response itself behind the a[k] (an autoregressive model
// with input, after Ljung, System Identification, 1999, 4.2; from memory). A direct form that rounds its sum once adds
// a rounding to just this equation, white and of nothing else, so the estimate is unbiased there; of other structures
// the rounding is coloured and a[k] near the unit circle are drawn inwards.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <vector>

#include "oracle/explain/capture_fit.hpp"

namespace halflsb {

struct LinearFit {
    std::vector<double> b;      ///< value out per value in; b[0] first
    std::vector<double> a;      ///< a[0] = 1
    double offset_lsb = 0.0;    ///< of the output
    double residual_lsb = 0.0;  ///< rms of what the equation leaves
    std::int64_t samples = 0;   ///< equations
};

/// By at most 32,768 samples that neither are nor follow, within the filter's memory, one at a rail. Costs 10^8 steps
/// at 64 coefficients. nullopt: codes without LSB, too few samples, or a stimulus that does not tell the coefficients
/// apart.
std::optional<LinearFit> fit_linear(const CaptureSet& captures, std::size_t feed_forward, std::size_t feedback);

/// How many coefficients a chain has, in a direct form: those of x, and those of y. nullopt where it is not linear,
/// changes the rate or has more than 160 of x or 8 of y.
struct LinearOrder {
    std::size_t feed_forward = 1, feedback = 0;
};
std::optional<LinearOrder> linear_order(const FilterChain& chain);

}  // namespace halflsb
