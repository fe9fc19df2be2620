// A capture as a baseline holds it: its hashes, and the file of the samples that are kept. Everything is read in
// blocks.
#pragma once

#include <cstdint>
#include <memory>
#include <string>

#include "oracle/judge/plan.hpp"
#include "runner/record/baseline_toml.hpp"
#include "runner/record/capture_file.hpp"
#include "runner/record/json_answer.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

/// All of a baseline's case but the name of its file: the first `kept_samples` are kept, the rest is hashed in
/// stretches.
Outcome<BaselineCase> describe_case(CaptureFile& capture, const Plan& plan, const CaseResult& recorded,
                                    std::int64_t kept_samples);

/// Where a response first differs from what was accepted before: to the sample while that is kept, else to the stretch.
Outcome<AcceptedCase> compare_with_before(CaptureFile& capture, const Plan& plan, const BaselineCase& before,
                                          const BaselineCase& now, const std::string& folder, const Files& files);

/// Whether the kept samples that stand at `path` are these: a file of the right name may have been damaged since.
bool kept_samples_stand_there(CaptureFile& capture, const Signal& signal, std::int64_t samples, const std::string& path,
                              const Files& files);

/// Size of a file of kept samples.
std::int64_t kept_bytes(const Signal& signal, std::int64_t samples);

/// The file of kept samples, whole but for the commit.
Outcome<std::unique_ptr<OutputFile>> write_kept_samples(CaptureFile& capture, const Signal& signal,
                                                        std::int64_t samples, const std::string& path, Files& files);

}  // namespace halflsb
