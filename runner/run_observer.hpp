// Who watches a run: the command line prints through this, tests remember.
#pragma once

#include <cstdint>
#include <string>

#include "runner/world/result.hpp"

namespace halflsb {

class RunObserver {
public:
    virtual ~RunObserver() = default;
    virtual void warning(const std::string& text) = 0;
    /// Board greeted, everything checked, no sample sent yet; `wire_s` is what all cases will take.
    virtual void opening(const RunResult& run, double wire_s) = 0;
    virtual void progress(std::size_t case_number, std::int64_t samples_done, std::int64_t samples_total) = 0;
    virtual void finished(const RunResult& run, const CaseResult& result) = 0;
};

}  // namespace halflsb
