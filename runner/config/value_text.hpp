// How messages name a value that was found, and the one that a Parameter wants.
#pragma once

#include <string>

#include "runner/config/toml_tree.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// "the string \"a\"", "the whole number 3", "the number 3.0", "true"; of the rest its kind.
std::string found_text(const TomlValue& value);

/// "a whole number", "an array of tables"
std::string wanted_text(ParameterType type);

/// How a value would look right: "write points = 16, without a decimal point and without quotation marks"
std::string example_text(const Parameter& parameter);

/// "from 1 to 65536 samples", "of at least 0 Hz", ""
std::string range_text(const Parameter& parameter);

}  // namespace halflsb
