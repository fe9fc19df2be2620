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
/// what lies above their half stays there, as if it had no image. Its realisations stay those that are sent.
Spectrum measured_spectrum(const Plan& plan, const Case& the_case);

/// The stretches that tones are measured in, as they stand in what is judged. In returned samples.
struct MeasuredRealisations {
    std::int64_t leading = 0;  ///< judged before the first of them
    std::int64_t samples = 0;  ///< of each
    std::int64_t count = 1;
    bool operator==(const MeasuredRealisations&) const = default;
};

/// With one realisation: all judged samples. Else those that are judged from their first sample to their last, counted
/// where the stimulus' own borders are, so a discard, a lag or a late start moves none of them into a stretch's middle:
/// what is cut is passed over. When only the end of the last is left, or none is whole, that much of one.
MeasuredRealisations measured_realisations(const Plan& plan, const Case& the_case, int lag_samples = 0);

/// Tones alone are measured at their frequencies, realisation by realisation, everything else by Welch's method.
/// `lag_samples` is that at which stimulus and error are added.
std::unique_ptr<ResponseMeasure> make_response_measure(const Plan& plan, const Case& the_case, int lag_samples = 0);

/// Frequencies in Hz at which this case can answer for the band, edges included; empty when its stimulus
/// has no power there or no bin falls into the band.
std::vector<double> answerable_hz(const ResponseBand& band, const Plan& plan, const Case& the_case);
/// Of those, where the mask limits the gain.
std::vector<double> answerable_hz(const ResponseMask& mask, const Plan& plan, const Case& the_case);

WantedReferences wanted_by(const ResponseRule& rule, bool is_driven);
/// A band without a point is undecided.
std::unique_ptr<RuleJudge> make_judge(const ResponseRule& rule, const Rule& asked, const JudgedChannel& channel);
void check(const ResponseRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
