// How far off a right response may be, for the criterion by which a case can tell its latency.
#pragma once

#include <optional>

#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

/// The rms error a passing response may have, as a value of the output: of the case's error rules, the smallest rms
/// limit; a largest limit bounds the rms too. None when neither is given. `derived` are asked_limits() of the channel.
std::optional<double> allowed_rms(const Case& the_case, const Signal& signal, const DerivedLimits& derived);
/// Sigma of the latency criterion (docs/methods.md): the larger of 1 output LSB and allowed_rms.
/// f32 has no LSB: the spacing of floats below full scale, 2^-24, takes its place.
double latency_sigma(const Case& the_case, const Signal& signal, const DerivedLimits& derived);

}  // namespace halflsb
