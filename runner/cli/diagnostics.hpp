// Where the libraries' diagnostics go: never to standard output, which carries the result.
#pragma once

#include <memory>
#include <optional>
#include <string>

#include "runner/cli/terminal.hpp"

namespace halflsb {

/// While it lives, spdlog's default logger is ours: warnings to standard error as plain lines, with
/// `verbose` everything from debug up with the time of day before it, and everything there is to the
/// log file, each line at once, with UTC time and level. Lines are escaped (runner/world/printable.hpp).
/// When it ends, diagnostics go nowhere.
class Diagnostics {
public:
    /// Replaces the log file. An Error, of kind output with the path as place: it cannot be opened.
    static Outcome<Diagnostics> start(Terminal& terminal, bool verbose, const std::optional<std::string>& log_file);

    Diagnostics(Diagnostics&& other) noexcept;
    Diagnostics& operator=(Diagnostics&&) = delete;
    ~Diagnostics();

private:
    Diagnostics() = default;
    bool active_ = true;
};

}  // namespace halflsb
