// What comes back of one sine against limits of the figures of oracle/measure/tone.hpp: which samples are measured, and
// the verdict.
#pragma once

#include <cstdint>
#include <memory>
#include <optional>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"
#include "oracle/judge/sample_window.hpp"

namespace halflsb {

/// From where the filter has settled on the sine to the last sample, of those the last tone_most_samples. nullopt where
/// the stimulus never is a steady sine, or the filter does not settle.
std::optional<SampleWindow> tone_window(const Plan& plan, const Case& the_case, int channel, int lag_samples);

/// The sine's frequency in cycles per returned sample; nullopt unless the stimulus comes to one steady sine, riding on
/// a constant at most.
std::optional<double> lone_tone(const Plan& plan, const Case& the_case);

/// The fewest samples that tell the rule's figures of a sine at that frequency: the measure's own least, a cycle from 0
/// and from half the rate, four samples for each column that is fitted. At least 1; infinite at 0 and half the rate.
double tone_samples_needed(const ToneRule& rule, double cycles_per_sample);

/// The samples repeat after the sine's shortest whole number of cycles, at least once: there is no noise in them, and
/// every run gives the same figures.
bool is_repeating(const std::vector<double>& samples, double cycles_per_sample);

WantedReferences wanted_by(const ToneRule& rule, bool is_driven);
std::unique_ptr<RuleJudge> make_judge(const ToneRule& rule, const Rule& asked, const JudgedChannel& channel);
void check(const ToneRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
