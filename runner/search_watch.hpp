// Who watches a search for what explains a run, and the questions it asks a board.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "runner/cli/options.hpp"
#include "runner/cli/progress.hpp"
#include "runner/commands.hpp"
#include "runner/run_observer.hpp"

namespace halflsb {

/// Ends a search at an interruption or when the time of --for is over, and shows on standard error what goes on.
class SearchWatch final : public RunObserver {
public:
    SearchWatch(const Desk& desk, const Options& options, int channels);

    bool go_on(int channel);
    bool has_time() const;

    void warning(const std::string& text) override;
    void starting(const RunResult&) override {}
    void greeted(const RunResult& run, std::optional<double> wire_s) override;
    void progress(std::size_t place, std::int64_t samples_done, std::int64_t samples_total) override;
    void retrying(const RunResult& run, int attempt, const Error& reason) override;
    void finished(const RunResult&) override {}

private:
    double elapsed_s() const;
    void err(const std::string& text);

    const Desk& desk_;
    TextStyle error_style_;
    Instant started_;
    std::optional<double> time_limit_s_;
    int channels_;
    LiveLine live_;
    std::vector<std::string> questions_;
};

}  // namespace halflsb
