// Limits of an error rule that follow from the declared arithmetic: of one case on one channel.
#pragma once

#include <optional>

#include "oracle/arithmetic/error_bound.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/measure/error.hpp"

namespace halflsb {

/// In values of the output. Each end holds by itself: a floor that rounds up is beyond the upper one.
struct DerivedLimits {
    ErrorEnds error;
    /// While no rail is reached: of noise by its statistics, else the worst case.
    double rms = 0.0;
    ErrorEnds bias;
    /// Once one may have been: the worst case.
    double worst_rms = 0.0;
    ErrorEnds worst_bias;
};

/// How the bound is used for this case: its judged samples, what came before them, and the rms of the input where the
/// stimulus is white noise (of the first 2^16 samples, as quantised).
BoundUse bound_use(const Plan& plan, const Case& the_case, int channel);
/// What the arithmetic of a channel says, counted from 1; nullopt where it cannot be described (the reader refuses it).
std::optional<DescribedChain> described_channel(const Plan& plan, const Case& the_case, int channel);
/// What the case is held to, in values at gain 1: in a case that does not start from a reset with what may be left of
/// the case before (leftover.hpp). nullopt where the arithmetic cannot be described. The first time for a filter it
/// costs the impulse responses of all paths from a rounding to the output, some 40 time constants of the slowest pole
/// each; the plan keeps them (limit_store.hpp).
std::optional<ErrorBound> judged_bound(const Plan& plan, const Case& the_case, int channel);
/// The same as limits.
std::optional<DerivedLimits> derived_limits(const Plan& plan, const Case& the_case, int channel);

/// What may remain at the output in silence, once no more than half a step is left of the design's tail; whole LSB
/// where the output has them. nullopt where the arithmetic cannot be described.
std::optional<ErrorEnds> derived_silence(const Plan& plan, const Case& the_case, int channel);

/// Some limit of the rule is derived.
bool is_derived(const ErrorRule& rule);
/// Those that an error rule of the case asks for; zeros where none does.
DerivedLimits asked_limits(const Plan& plan, const Case& the_case, int channel);
/// The limit of a magnitude as a value of the output; of a derived one the entry of `derived`.
double value_of(const Limit& limit, const Signal& signal, double derived);

}  // namespace halflsb
