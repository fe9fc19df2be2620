// The first steps that a plan and a rig share: read the file, see that it is text, parse it.
#pragma once

#include <string>
#include <variant>

#include "runner/config/problems.hpp"
#include "runner/config/toml_tree.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

struct Document {
    SourceText source;
    TomlValue tree;
    std::string bytes = {};  ///< as they were in the file, a byte order mark included
};

/// Or why there is none: missing, no regular file, 1 MiB or larger (then unread), empty, no UTF-8, no TOML.
/// `page` is where the docs show how such a file looks.
std::variant<Document, ReadProblems> open_document(const std::string& path, const Files& files, std::string_view page);

/// The tree of a text, or the message about what makes it none: empty, no UTF-8, no TOML. `source_index` becomes
/// the source of every place.
std::variant<TomlValue, std::string> parse_document(const SourceText& source, std::string_view page,
                                                    int source_index = 0);

/// The folder that a path names a file in; "." for a bare name.
std::string folder_of(const std::string& path);

}  // namespace halflsb
