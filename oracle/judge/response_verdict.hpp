// Gain against bands: which estimator a stimulus gets, what it can answer, and the verdict.
#pragma once

#include <memory>
#include <optional>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/verdict.hpp"
#include "oracle/measure/response.hpp"

namespace halflsb {

/// Tones are measured at their frequencies over the whole record, everything else by Welch's method.
std::unique_ptr<ResponseMeasure> make_response_measure(const Stimulus& stimulus);

/// Frequencies in Hz at which this stimulus can answer for the band, edges included; empty when it
/// has no power there or no bin falls into the band.
std::vector<double> answerable_hz(const ResponseBand& band, const Stimulus& stimulus, double rate_hz);

/// Held against `design`. A band without a point is undecided.
RuleVerdict judge_response(const ResponseRule& rule, const Rule& asked, const Plan& plan, const Stimulus& stimulus,
                           const std::vector<ResponsePoint>& points);

}  // namespace halflsb
