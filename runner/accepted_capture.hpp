// What a baseline keeps of one capture, and where a capture differs from what was kept before.
#pragma once

#include <cstdint>
#include <string>

#include "oracle/judge/plan.hpp"
#include "runner/record/baseline_toml.hpp"
#include "runner/record/capture_file.hpp"
#include "runner/record/json_answer.hpp"
#include "runner/world/files.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

/// Its hashes; those of stretches too where only `kept_samples` instants of more are kept. `kept` is left empty.
/// Errors: a capture that cannot be read, an interrupt.
Outcome<BaselineCase> describe_capture(CaptureFile& capture, const Plan& plan, const CaseResult& recorded,
                                       std::int64_t kept_samples);

/// Where a response first differs from what was accepted before: to the sample while that is kept, else to the stretch.
/// `folder` is the baseline's, of the same format and channels. Errors as above.
Outcome<AcceptedCase> compare_capture(CaptureFile& capture, const Plan& plan, const BaselineCase& before,
                                      const BaselineCase& now, const std::string& folder, const Files& files);

/// Writes the first `samples` instants as NPY to `path`; returns the bytes of that file.
Outcome<std::int64_t> write_kept_samples(CaptureFile& capture, const Signal& signal, std::int64_t samples,
                                         const std::string& path, Files& files);

}  // namespace halflsb
