// Any text as a string of TOML: for what we write and read back.
#pragma once

#include <string>
#include <string_view>

namespace halflsb {

/// `text` as a basic string of TOML, quotes included; bytes that are no UTF-8 become U+FFFD.
std::string toml_quoted(std::string_view text);

}  // namespace halflsb
