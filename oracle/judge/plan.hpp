// What the firmware's team asks: facts of the signal, the filter, and cases with their rules. The
// reader (runner/config) makes one from a file; everything in it has been checked against itself.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <string>
#include <vector>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/rule.hpp"
#include "stimuli/sample_format.hpp"
#include "stimuli/stimulus.hpp"

namespace halflsb {

/// Facts of the firmware; the board's greeting must agree.
struct Signal {
    double rate_hz = 0.0;
    SampleFormat input, output;
    /// Value out per value in at gain 1; 1 within one family of formats.
    double output_per_input = 1.0;
    std::string filter;  ///< the board's name for it; empty: the only one the board has
    std::string unit;    ///< engineering unit of the output, "" when none was given
    std::optional<double> full_scale_unit;
    Rounding quantise = Rounding::half_up;  ///< of the stimuli
};

/// One stimulus with its rules, from reset.
struct Case {
    std::string name;
    std::string shape;
    ParameterValues stimulus_values;  ///< as the plan gave them, for records and for --seed
    std::shared_ptr<const Stimulus> stimulus;
    std::vector<Rule> rules;  ///< those of the case, those for every case, and a latency rule in any event
    PlanPosition position;
};

struct Plan {
    std::string title;
    std::string file;
    Signal signal;
    FilterChain filter;
    std::vector<Case> cases;
};

}  // namespace halflsb
