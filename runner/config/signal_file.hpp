// A stimulus as somebody recorded or designed it: a CSV or an NPY file under the plan's root.
//
// NPY (stimuli/npy.hpp): one dimension, or (samples, channels), whose columns are called "1", "2" ...
//
// CSV: numbers with a decimal point, the same count on every line, between commas, semicolons or tabs (what the
// first line uses). A first line of words names the columns; what follows a # is a comment. `# rate_hz = 1200` states
// the sample rate, as does a column time_s, in seconds, which then is no data: each time must lie where that rate
// puts it, within the last digit that the file gives and 1e-6 of the time since the first one.
#pragma once

#include <optional>
#include <string>
#include <variant>

#include "stimuli/parameter.hpp"

namespace halflsb {

struct SignalFileName {
    std::string as_written;  ///< in the plan
    std::string shown;       ///< in messages about what the file holds
    /// The rate of the signal: times that agree with it state exactly this one.
    std::optional<double> rate_hz = {};
};

/// The columns, or the rendered message about the first thing that is wrong, at the file's own line and column, or
/// byte. Some 5 million numbers a second; holds them as doubles.
std::variant<SignalFile, std::string> read_signal_file(const SignalFileName& name, std::string bytes);

/// The most columns a file may have.
inline constexpr std::size_t most_signal_columns = 256;

}  // namespace halflsb
