// What a response rule may ask of phase and group delay.
//
// Whole samples of latency are in neither: they are taken off before.
#pragma once

#include <optional>
#include <vector>

#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

struct PhaseLimits {
    std::optional<double> max_phase_deg;
    /// Relative to the design: the size of the difference, and no least one.
    std::optional<double> min_group_delay_samples, max_group_delay_samples;
    bool relative_to_design = true;
    std::optional<double> from_hz, to_hz;          ///< both or none: the passband of the design
    double passband_db = 3.0;                      ///< below the design's highest gain
    double delta_deg = 0.5, delta_samples = 0.05;  ///< zones of indifference beyond each limit

    bool limits_delay() const { return min_group_delay_samples || max_group_delay_samples; }
    bool any() const { return max_phase_deg || limits_delay(); }
};

/// The words of them, for the recipe of the rule.
std::vector<Parameter> phase_parameters();
/// An Error's place is the name of the parameter to blame.
Outcome<PhaseLimits> make_phase_limits(const Recipe& recipe, const ParameterValues& values, double nyquist_hz);

}  // namespace halflsb
