// A file of one number a line, as design programs write coefficients.
#pragma once

#include <string>
#include <variant>
#include <vector>

#include "runner/config/source_text.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// The numbers, in the range of the parameter; blank lines and what follows a # are skipped. Or the
/// rendered message about the first line that is wrong.
std::variant<std::vector<double>, std::string> read_number_file(const SourceText& source, const Parameter& parameter);

}  // namespace halflsb
