// A folder with plans and recorded runs of a model board, and the commands that read them.
#pragma once

#include <functional>
#include <string>
#include <vector>

#include "runner/cli/options.hpp"
#include "runner/world/result.hpp"
#include "tests/diagnostics/page.hpp"
#include "tests/support/model_board.hpp"
#include "tests/support/temporary_folder.hpp"

namespace halflsb::diagnostics {

/// While it lives the program stands in that folder, so that paths in messages are the same everywhere.
class Workshop {
public:
    Workshop();
    ~Workshop();
    Workshop(const Workshop&) = delete;
    Workshop& operator=(const Workshop&) = delete;

    void write(const std::string& path, const std::string& text) const;
    std::string read(const std::string& path) const;
    /// The run of a plan on a right board, or one that `change` made wrong, in that folder.
    RunResult record(const std::string& plan, const std::string& folder,
                     const std::function<void(test::ModelBoard&)>& change = {}) const;
    /// What a command line of judge, accept or check writes to standard error and, with `result`, to standard output.
    std::string said_by(const std::vector<std::string>& arguments, bool result = false) const;

private:
    std::string before_;
    TemporaryFolder folder_;
};

}  // namespace halflsb::diagnostics
