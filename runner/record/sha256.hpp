// SHA-256 (FIPS 180-4) in 64 lower-case hexadecimal digits: ties a record to the bytes it was made
// from.
#pragma once

#include <string>
#include <string_view>

#include "stimuli/outcome.hpp"

namespace halflsb {

std::string sha256_of_text(std::string_view bytes);

/// Of a file, read in pieces of constant size. An Error is of kind output, its place the path: only
/// files that a run has just written are hashed this way.
Outcome<std::string> sha256_of_file(const std::string& path);

}  // namespace halflsb
