// Whether a case can tell its latency, found on paper (design 2, docs/methods.md).
#pragma once

#include <cstdint>

#include "oracle/judge/plan.hpp"
#include "oracle/measure/lag.hpp"

namespace halflsb {

/// The factor of design 2: with a residual of rms sigma a wrong lag is then told from a right one.
inline constexpr double latency_evidence_ratio = 130.0;

/// How far into a case the evidence is looked for on paper, about a second of work: a stimulus that is
/// silent for longer would hold up the reading of its plan. 2^22 samples, fewer for long filters.
std::int64_t latency_evidence_samples(const FilterChain& filter);

/// The lags that a case can be searched for, from its judged samples.
int lag_window_of(const Plan& plan, const Case& the_case);
/// The first sample whose lag counts: of a running case every sample that it meets, up to the window's end on
/// either side, must come after the discard.
std::int64_t first_lag_sample(const Plan& plan, const Case& the_case, int window);
/// The delay that the case's latency rule asks for; 0 without one.
int expected_lag_of(const Case& the_case);

/// Whether the references of a case can tell its latency at all: on every driven channel every other lag in the
/// window would leave a squared residual of at least 130 sigma^2, within the first latency_evidence_samples,
/// and the expected latency lies in the window. Costs a pass of the reference over these for each kind of
/// driven channel, less when it can tell early. An unknown filter has no reference, so it cannot tell.
struct LatencyEvidence {
    bool can_tell = false;
    double smallest_ratio = 0.0;  ///< min over k of sum (r[n-k] - r[n])^2 / sigma^2
    int hardest_lag = 0;
    int channel = 0;                   ///< the one with the least evidence, from 1; 0: the signal has only one
    int window = 0;                    ///< lags of -window .. window were looked at
    std::int64_t samples = 0;          ///< how many sent samples of the case were looked at, at most
    bool expected_is_outside = false;  ///< the expected latency lies beyond the window
};
LatencyEvidence latency_evidence(const Plan& plan, const Case& the_case);

}  // namespace halflsb
