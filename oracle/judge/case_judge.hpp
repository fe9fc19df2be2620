// Judges one case as its response arrives: blocks in, verdicts out, constant memory.
#pragma once

#include <cstdint>
#include <functional>
#include <memory>
#include <span>
#include <vector>

#include "oracle/judge/aligned_pass.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/reference_source.hpp"
#include "oracle/judge/verdict.hpp"
#include "oracle/measure/lag.hpp"

namespace halflsb {

/// Reads response codes again, from `first_index` on; the capture has them all.
using ResponseReplay = std::function<Outcome<void>(std::int64_t first_index, std::span<Code> codes)>;

struct CaseJudgement {
    std::vector<RuleVerdict> rules;  ///< in the order of the case; an implicit latency rule only where it could tell
    bool latency_told = false;
};

/// The factor of design 2: with a residual of rms sigma a wrong lag is then told from a right one.
inline constexpr double latency_evidence_ratio = 130.0;

class CaseJudge {
public:
    /// The plan and the case must outlive the judge.
    CaseJudge(const Plan& plan, const Case& the_case);
    /// The next response samples, in order from index 0.
    void add(std::span<const Code> response);
    /// After the last sample. `replay` is asked only when the response fits better at another lag than
    /// the expected one: the case is then gone through a second time. Fails when replay does.
    Outcome<CaseJudgement> finish(const ResponseReplay& replay);

private:
    const Plan& plan_;
    const Case& case_;
    const Rule* latency_rule_;
    int expected_lag_;
    bool with_design_;
    ReferenceSource reference_;
    AlignedPass pass_;
    LagMeasure lag_;
    LagDiscrimination discrimination_;
    double evidence_needed_;
    std::int64_t samples_ = 0;
    std::vector<double> response_values_;
};

/// How far into a case the evidence is looked for on paper, about a second of work: a stimulus that is
/// silent for longer would hold up the reading of its plan. 2^22 samples, fewer for long filters.
std::int64_t latency_evidence_samples(const FilterChain& filter);

/// Whether the reference of a case can tell its latency at all (design 2): every other lag in the
/// window would leave a squared residual of at least 130 sigma^2, within the first
/// latency_evidence_samples. Costs a pass of the reference over these, less when it can tell early.
struct LatencyEvidence {
    bool can_tell = false;
    double smallest_ratio = 0.0;  ///< min over k of sum (r[n-k] - r[n])^2 / sigma^2
    int hardest_lag = 0;
};
LatencyEvidence latency_evidence(const Plan& plan, const Case& the_case);

}  // namespace halflsb
