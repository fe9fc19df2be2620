#include "stimuli/tone_phase.hpp"

#include <cmath>

#include "stimuli/exact_math.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

Tone tone_of(double frequency_hz, double rate_hz, TurnFraction start) {
    return {phase_after(wide(frequency_hz) / wide(rate_hz), 1), start};
}

std::vector<Parameter> tone_parameters(std::string_view phase_help) {
    return {
        {.name = "frequency_hz",
         .type = ParameterType::real,
         .unit = "Hz",
         .minimum = 0.0,
         .above_minimum = true,
         .required = true,
         .help = "Frequency, not above Nyquist."},
        {.name = "phase_turns",
         .type = ParameterType::real,
         .unit = "turns",
         .minimum = -1.0,
         .maximum = 1.0,
         .default_value = 0.0,
         .help = phase_help},
    };
}

Outcome<Tone> tone_from(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    const double frequency_hz = values.number(recipe, "frequency_hz").value_or(0.0);
    if (auto error = frequency_error("frequency_hz", frequency_hz, context.rate_hz)) return *error;
    const double phase_turns = values.number(recipe, "phase_turns").value_or(0.0);
    TurnFraction start = phase_after(wide(std::abs(phase_turns)), 1);
    if (phase_turns < 0.0) start = 0 - start;
    if (frequency_hz == context.rate_hz / 2.0 && sine_of_turns(start) == 0.0) {
        return refused("phase_turns",
                       "a sine of " + number_text(frequency_hz) +
                           " Hz, Nyquist, with phase_turns = " + number_text(phase_turns) + " is zero in every sample",
                       "give phase_turns = 0.25, or a lower frequency");
    }
    return tone_of(frequency_hz, context.rate_hz, start);
}

}  // namespace halflsb
