// Gain against bands: which estimator a stimulus gets, what it can answer, and the verdict.
#pragma once

#include <memory>
#include <optional>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"
#include "oracle/measure/response.hpp"

namespace halflsb {

/// What a response is measured by: the tones only where nothing continuous is beside them. Noise or a chirp answers for
/// each bin of a band; a sine added to it would leave the rest of the band unjudged. In cycles per returned sample;
/// what lies above their half stays there, as if it had no image.
Spectrum measured_spectrum(const Plan& plan, const Case& the_case);

/// Tones alone are measured at their frequencies over all judged samples, everything else by Welch's method.
std::unique_ptr<ResponseMeasure> make_response_measure(const Plan& plan, const Case& the_case);

/// Frequencies in Hz at which this case can answer for the band, edges included; empty when its stimulus
/// has no power there or no bin falls into the band.
std::vector<double> answerable_hz(const ResponseBand& band, const Plan& plan, const Case& the_case);

WantedReferences wanted_by(const ResponseRule& rule, bool is_driven);
/// A band without a point is undecided.
std::unique_ptr<RuleJudge> make_judge(const ResponseRule& rule, const Rule& asked, const JudgedChannel& channel);
void check(const ResponseRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
