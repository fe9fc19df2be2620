// The bytes of a CSV mask file to its rows. Inside this room only.
#pragma once

#include <optional>
#include <string>
#include <variant>

#include "runner/config/source_text.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// Columns from_hz, to_hz, min_db or -inf, max_db or +inf; at most 10 000 rows, each flat, ascending, without gap or
/// overlap. Or a text that says what is wrong, at its line.
std::variant<SignalFile, std::string> read_csv_mask(const std::string& path_as_written, const SourceText& source,
                                                    std::optional<double> nyquist_hz);

}  // namespace halflsb
