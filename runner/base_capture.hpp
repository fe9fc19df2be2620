// The capture that a companion is held against, of the run at work or of a recorded one.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "oracle/judge/base_response.hpp"
#include "oracle/judge/plan.hpp"
#include "runner/world/files.hpp"
#include "runner/world/result.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// nullptr where none has the name.
const CaseResult* result_named(const std::vector<CaseResult>& results, std::string_view name);

/// `base` is what that case came to, nullptr where it did not run; its capture lies at `path`, shown as `shown`. A base
/// without a whole capture is no Error: the companion is undecided then, and the response says why. Errors: a file that
/// cannot be read, as of CaptureFile.
Outcome<BaseResponse> base_response(const Case& companion, const CaseResult* base, const std::string& path,
                                    const std::string& shown, const Signal& signal, int granted_block_samples,
                                    const Files& files);

}  // namespace halflsb
