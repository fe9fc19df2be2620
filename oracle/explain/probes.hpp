// Stimuli that separate boards: what a case of the plan may not have asked yet. Each is one that a plan can say, so
// that it can be asked of a board, too.
#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <vector>

#include "oracle/explain/hypothesis.hpp"
#include "oracle/judge/plan.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

struct Probe {
    std::string what;         ///< "noise over the whole range"
    StimulusWords words;      ///< as a plan says it
    std::vector<Code> codes;  ///< what is sent
};

/// For a channel of the signal: noise loud and soft, impulses of either sign and of every power of two, the lowest
/// code, steps of both signs, a ramp, a slow square, a burst with silence behind it. `peak_ratio`, above 0 and at most
/// 1: the part of full scale that none of them goes beyond.
std::vector<Probe> probes_for(const Signal& signal, double peak_ratio = 1.0);

/// The first probe on which two boards differ, each from a reset and, once more, after a loud case; none: on no one.
std::optional<std::string> separating_probe(const BoardDescription& a, const BoardDescription& b, const Signal& signal,
                                            const std::vector<Probe>& probes);

/// The fewest probes, found one by one, that tell apart all of the boards that can be told apart by any, each after the
/// ones before it: places in `probes`, in the order to ask them.
std::vector<std::size_t> separating_probes(const std::vector<BoardDescription>& boards, const Signal& signal,
                                           const std::vector<Probe>& probes);

}  // namespace halflsb
