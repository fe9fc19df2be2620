// Gain and phase as a response rule measured them, with its mask, the design, and the interval of each point.
#pragma once

#include <vector>

#include "oracle/judge/plots.hpp"
#include "oracle/judge/response_band.hpp"
#include "oracle/judge/response_phase.hpp"
#include "oracle/measure/response.hpp"

namespace halflsb {

/// `points`: all that the stimulus answers for, in a band or not, ascending. Intervals hold one point with the plan's
/// `confidence` at a time. Where limits are relative to the design, so are the gains.
Plot response_plot(const ResponseRule& rule, const std::vector<BandPoint>& points,
                   const std::vector<BandDecision>& bands, const PhaseDecisions& phase, const ResponseSums& sums,
                   double confidence);

}  // namespace halflsb
