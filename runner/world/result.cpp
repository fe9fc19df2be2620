#include "runner/world/result.hpp"

#include <algorithm>

namespace halflsb {

Counts RunResult::counts() const {
    Counts counts;
    for (const CaseResult& result : cases) {
        switch (result.verdict) {
            case CaseVerdict::pass:
                ++counts.pass;
                break;
            case CaseVerdict::fail:
                ++counts.fail;
                break;
            case CaseVerdict::invalid:
                ++counts.invalid;
                break;
            case CaseVerdict::undecided:
                ++counts.undecided;
                break;
        }
    }
    counts.not_run = cases_planned.size() > cases.size() ? cases_planned.size() - cases.size() : 0;
    return counts;
}

bool RunResult::latency_verified() const {
    return std::any_of(cases.begin(), cases.end(), [](const CaseResult& result) { return result.latency_told; });
}

}  // namespace halflsb
