// The door to the TOML library: text in, a plain tree with positions out. No other file includes it, so
// that its cost in build time and its traps (a default taken for a wrong type, NaN) stay behind here.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <variant>
#include <vector>

#include "runner/config/source_text.hpp"

namespace halflsb {

struct TomlEntry;

struct TomlValue {
    enum class Kind { text, integer, real, boolean, date, array, table };

    Kind kind = Kind::table;
    Place place;  ///< of the value; of a table under a header, of that header
    std::string text;
    std::int64_t integer = 0;
    double real = 0.0;  ///< may be NaN or infinite: TOML has words for them
    bool boolean = false;
    bool is_inline = false;          ///< a table in braces
    std::vector<TomlValue> items;    ///< of an array
    std::vector<TomlEntry> entries;  ///< of a table, in the order of the file

    /// The entry of that key, or nullptr.
    const TomlEntry* find(std::string_view key) const;
};

struct TomlEntry {
    std::string key;
    Place key_place;
    TomlValue value;
};

/// For messages: "a string", "a whole number", "a number", "a boolean", "a date or time", "a list", "a table".
std::string kind_text(const TomlValue& value);

/// The tree, or the one message about what is no TOML, a repeated key among it. The library stops at the
/// first such problem, so it stands alone. `source_index` becomes the source of every place.
std::variant<TomlValue, std::string> parse_toml(const SourceText& source, int source_index = 0);

}  // namespace halflsb
