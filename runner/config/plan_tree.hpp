// A plan and all that it includes, joined into one tree whose values know the file that they came from.
//
//     include = ["common.toml"]      # paths under the root
//
// What is included comes first. Lists of tables ([[filter]], [[rule]], [[case]]) are joined in order, tables
// ([signal]) key by key; a key that is given twice is refused, but the title of the including file wins.
#pragma once

#include <cstddef>
#include <deque>
#include <string_view>

#include "runner/config/document.hpp"
#include "runner/config/reader.hpp"

namespace halflsb {

inline constexpr std::string_view include_word = "include";
inline constexpr std::string_view include_help =
    "Other plans under the root whose content comes before that of this one.";

/// The most files that a plan may include, those of included files among them.
inline constexpr std::size_t most_included_files = 64;

/// Takes the place of document.tree. `sources` keeps the texts of the included files and must live as long as the
/// context's Problems. False: a file could not be read or is no TOML; then what the plan lacks is not known, and
/// only what was reported here should be told.
bool join_includes(Document& document, ReadContext& context, std::deque<SourceText>& sources);

}  // namespace halflsb
