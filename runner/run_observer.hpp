// Who watches a run: the command line prints through this, tests remember.
#pragma once

#include <cstdint>
#include <optional>
#include <string>

#include "runner/world/result.hpp"

namespace halflsb {

class RunObserver {
public:
    virtual ~RunObserver() = default;
    virtual void warning(const std::string& text) = 0;
    /// Files read and the run's folder made; the board is not touched yet.
    virtual void starting(const RunResult& run) = 0;
    /// The board greeted and everything agrees, no sample sent yet; `wire_s` is what all cases will take, where baud
    /// has a meaning.
    virtual void greeted(const RunResult& run, std::optional<double> wire_s) = 0;
    /// `place` of the case among the selected ones, from 1.
    virtual void progress(std::size_t place, std::int64_t samples_done, std::int64_t samples_total) = 0;
    /// The case after the last of run.cases gave no whole capture at this attempt (from 1), for that reason, and runs
    /// again.
    virtual void retrying(const RunResult& run, int attempt, const Error& reason) = 0;
    /// The last of run.cases is done and recorded.
    virtual void finished(const RunResult& run) = 0;
};

}  // namespace halflsb
