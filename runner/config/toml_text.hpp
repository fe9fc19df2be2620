// A tree as TOML text, in one readable layout: keys first, then tables under their headers, then lists of tables.
// Numbers are in the shortest text that reads back as the same number.
#pragma once

#include <functional>
#include <string>
#include <string_view>
#include <vector>

#include "runner/config/toml_tree.hpp"

namespace halflsb {

/// A key, bare where TOML allows it.
std::string toml_key(std::string_view key);
/// One value in one line.
std::string toml_value(const TomlValue& value);

/// The lines of a table whose header is written already: its keys, then what lies in tables below it. `header` is
/// the path of the table, "" at the top. Lists of tables among `listed` become [[header.key]], all other arrays
/// stay values; the tables and lists come in the order of the entries.
std::string toml_table(const TomlValue& table, const std::string& header, const std::vector<std::string_view>& listed);

}  // namespace halflsb
