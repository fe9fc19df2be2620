// Limits in the units a plan may write, and values of the signal in those units.
#pragma once

#include <optional>
#include <string>

#include "oracle/judge/plan.hpp"
#include "oracle/rules/rule.hpp"

namespace halflsb {

/// What one unit of `in` is worth as a value of the output. Engineering units need full_scale_unit.
double worth_of(Limit::In in, const Signal& signal);
/// One LSB as a value; f32 has none: the spacing of floats below full scale, 2^-24 of it, takes its place.
double finest_step(const SampleFormat& output);
/// The limit as a value of the output.
double value_of(const Limit& limit, const Signal& signal);
/// "LSB", "of full scale", or the plan's unit.
std::string unit_name(Limit::In in, const Signal& signal);
/// The unit in which errors are told when no limit chooses one: LSB, or full scale for f32.
Limit::In natural_unit(const Signal& signal);
/// A figure for a message, with 4 significant digits.
std::string brief(double number);

}  // namespace halflsb
