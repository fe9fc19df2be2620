// The plan by which a board is asked what tells several causes apart: signal and filter of another plan, and cases of
// its own.
#pragma once

#include <string>
#include <variant>
#include <vector>

#include "runner/config/plan_file.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

struct QuestionCase {
    std::string name;
    std::string purpose;
    StimulusWords stimulus;
};

/// One text without includes; files that the plan names stay named. Each case is streamed to its end. Where `has_twin`
/// the cases are held against the declared arithmetic, otherwise nothing is judged but that a capture is whole. The
/// first one begins with zeros in place of a reset where `first_flushes`: nobody knows what was before.
std::variant<std::string, ReadProblems> question_plan(const std::string& path, const Files& files,
                                                      const PlanOptions& options,
                                                      const std::vector<QuestionCase>& cases, bool has_twin,
                                                      bool first_flushes);

}  // namespace halflsb
