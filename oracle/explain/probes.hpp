// Stimuli that separate boards: what a case of the plan may not have asked yet.
#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <vector>

#include "oracle/explain/hypothesis.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb {

struct Probe {
    std::string what;  ///< "noise over the whole range"
    std::vector<Code> codes;
};

/// For one format of samples: noise loud and soft, impulses of either sign and of every power of two, the lowest code,
/// steps of both signs, a ramp, a slow square, a burst with silence behind it.
std::vector<Probe> probes_for(const SampleFormat& format);

/// The first probe on which two boards differ, each from a reset and, once more, after a loud case; none: on no one.
std::optional<std::string> separating_probe(const BoardDescription& a, const BoardDescription& b, const Signal& signal,
                                            const std::vector<Probe>& probes);

}  // namespace halflsb
