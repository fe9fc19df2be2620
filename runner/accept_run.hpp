// Makes the captures of a run the baseline of its plan's `unchanged` rules.
#pragma once

#include <cstdint>
#include <map>
#include <optional>
#include <string>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "runner/judge_run.hpp"
#include "runner/record/baseline_toml.hpp"
#include "runner/record/json_answer.hpp"
#include "runner/record/recorded_run.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

/// Why a judged run is no baseline, all reasons at once, each with case and rule: an invalid case, one that was not
/// captured, a rule other than `unchanged` that failed or was undecided, a plan without any `unchanged` rule.
std::optional<Error> refusal_of_accept(const RunResult& judged, const Plan& plan);

/// Cases by the baseline folder (below the root) that their rules name.
std::map<std::string, std::vector<Judgement::Match>> cases_by_baseline(const Plan& plan,
                                                                       const std::vector<Judgement::Match>& matches);

struct AcceptWish {
    std::string root;      ///< folder that exists
    std::string baseline;  ///< below it
    std::string accepted_utc;
    std::string tool_version;
    std::int64_t kept_samples = usual_kept_samples;
};

/// Writes one baseline: kept samples first, baseline.toml last. Cases of the old one that this run does not have stay.
/// Samples that are there already are not written again. Errors: a folder that leads out of the root, an old baseline
/// that cannot be read, of another format, or a rule that needs more samples than are kept (kind input); a disk that
/// cannot be written (kind output).
Outcome<AcceptedBaseline> accept_baseline(const RecordedRun& record, const Plan& plan,
                                          const std::vector<Judgement::Match>& matches,
                                          const std::optional<BaselineContent>& before, const AcceptWish& wish,
                                          Files& files);

}  // namespace halflsb
