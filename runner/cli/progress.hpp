// A live line on standard error for a case that takes long. Off a terminal there is none: finished
// cases have a line each, and nothing else is printed.
#pragma once

#include <cstdint>
#include <optional>
#include <string>

#include "runner/cli/terminal.hpp"
#include "runner/world/clock.hpp"

namespace halflsb {

struct Progress {
    std::size_t case_place = 0;  ///< among the selected cases, from 1
    std::size_t cases = 0;
    std::string name;
    std::int64_t samples_done = 0, samples_total = 0;  ///< none in all: nobody knows how many there are
    double elapsed_s = 0.0;                            ///< of this case
};

/// "3/8 mains hum, half scale  42 %  12 s left" in at most `columns`, without a line break. The name
/// gives way first, then the rest; the time left is told from one second on.
std::string progress_text(const Progress& progress, int columns, bool unicode);

class LiveLine {
public:
    /// Draws nothing unless `enabled` and standard error can be redrawn. Both must outlive it.
    LiveLine(Terminal& terminal, const Clock& clock, bool enabled = true);
    ~LiveLine();
    LiveLine(const LiveLine&) = delete;
    LiveLine& operator=(const LiveLine&) = delete;

    /// Draws, at most ten times a second and not before the case has taken half a second.
    void update(const Progress& progress);
    /// Takes the line away; before anything else is printed, and by itself at the end.
    void erase();

private:
    Terminal& terminal_;
    const Clock& clock_;
    bool enabled_;
    bool drawn_ = false;
    std::optional<Instant> last_;
};

}  // namespace halflsb
