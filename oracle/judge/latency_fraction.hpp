// What a latency is beside whole samples, where a rule in the plan asks for it and a stimulus of many frequencies
// tells.
#pragma once

#include <memory>

#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

/// nullptr where the stimulus cannot tell. Its verdict is about the fraction alone, pass where nothing limits it.
std::unique_ptr<RuleJudge> make_judge(const LatencyRule& rule, const Rule& asked, const JudgedChannel& channel);

}  // namespace halflsb
