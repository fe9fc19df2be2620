// What the words of every kind of rule share: what their ranges hang on, and how one is refused.
#pragma once

#include <optional>
#include <string>

#include "stimuli/outcome.hpp"

namespace halflsb {

/// What the ranges of a rule depend on.
struct RuleContext {
    double rate_hz = 1.0;
    bool output_has_lsb = true;
    double output_full_scale_lsb = 0.0;  ///< full scale in LSB; a limit beyond it is refused
    std::optional<double> full_scale_unit;
};

inline Error refused_word(std::string parameter, std::string problem, std::string remedy) {
    return {ErrorKind::input, std::move(parameter), std::move(problem), std::move(remedy)};
}

}  // namespace halflsb
