// Limits in the units a plan may write, and values of the signal in those units.
#pragma once

#include <optional>
#include <string>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/rule.hpp"

namespace halflsb {

/// What one unit of `in` is worth as a value of the output. Engineering units need full_scale_unit.
double worth_of(Limit::In in, const Signal& signal);
/// The limit as a value of the output.
double value_of(const Limit& limit, const Signal& signal);
/// "LSB", "of full scale", or the plan's unit.
std::string unit_name(Limit::In in, const Signal& signal);
/// The unit in which errors are told when no limit chooses one: LSB, or full scale for f32.
Limit::In natural_unit(const Signal& signal);

/// The rms error a passing response may have, as a value of the output: of the case's error rules, the
/// smallest rms limit; a largest limit bounds the rms too. None when neither is given.
std::optional<double> allowed_rms(const Case& the_case, const Signal& signal);
/// Sigma of the latency criterion (docs/methods.md): the larger of 1 output LSB and allowed_rms.
/// f32 has no LSB: the spacing of floats below full scale, 2^-24, takes its place.
double latency_sigma(const Case& the_case, const Signal& signal);

}  // namespace halflsb
