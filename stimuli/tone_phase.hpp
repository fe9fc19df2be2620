// The phase of one sine, exact at any index. Inside this room only.
#pragma once

#include "stimuli/shape.hpp"
#include "stimuli/wide.hpp"

namespace halflsb {

/// sin(2 pi (start + n step)), in integers modulo one turn. The step is truncated to 2^-128 turns, so
/// the phase is good to 2^-88 turns for n up to 2^40.
struct Tone {
    TurnFraction step = 0;
    TurnFraction start = 0;

    TurnFraction phase_at(std::int64_t own_index) const { return start + step * static_cast<std::uint64_t>(own_index); }
};

Tone tone_of(double frequency_hz, double rate_hz, TurnFraction start);

/// frequency_hz and phase_turns, in this order.
std::vector<Parameter> tone_parameters(std::string_view phase_help);
/// Reads the two; refuses a frequency above Nyquist, and a sine at Nyquist that is zero in every sample.
Outcome<Tone> tone_from(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context);

}  // namespace halflsb
