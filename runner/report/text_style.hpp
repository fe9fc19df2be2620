// How text is laid out for a terminal: colour, width, signs. Decided by the caller (runner/cli knows
// the terminal); everything here is a pure function.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

namespace halflsb {

struct TextStyle {
    bool colour = false;
    int width = 80;       ///< columns, at least 40
    bool unicode = true;  ///< may hold signs beyond ASCII of our own; text of a plan stays as it is
};

enum class Ink { plain, good, bad, doubtful, faint };

/// `text` in colour when the style has colour; never the only carrier of a meaning.
std::string painted(const TextStyle& style, Ink ink, std::string_view text);

/// Lines of at most style.width columns, broken at blanks, each starting with `indent` blanks and
/// ending in a line break. Line breaks in `text` stay; a word longer than a line is not broken.
std::string wrapped(const TextStyle& style, std::string_view text, std::size_t indent);

/// `text`, or its start and end with an ellipsis between, as much as fits `columns`.
std::string cut_to(const TextStyle& style, std::string_view text, std::size_t columns);

/// Filled up with blanks to `columns`.
std::string padded(std::string_view text, std::size_t columns);
/// A key and, from the column on, its value, which may take several lines.
std::string labelled(const TextStyle& style, std::string_view key, const std::string& value, std::size_t column);
std::string padded_left(std::string_view text, std::size_t columns);

struct Table {
    struct Column {
        std::string heading;
        bool to_the_right = true;
        int drop_order = 0;  ///< 1 is left out first where the table is too wide; 0 never
    };
    std::vector<Column> columns;
    std::vector<std::vector<std::string>> rows;  ///< columns.size() cells each
    std::size_t indent = 0;
};

/// The table in lines; columns are left out in their order until it fits. `width` receives the
/// columns it takes, more than style.width when even that was not enough.
std::string laid_out(const TextStyle& style, const Table& table, std::size_t* width = nullptr);

}  // namespace halflsb
