// The text of a plan or a rig with positions, and how a problem in it is shown:
//
//     plan.toml:12:1: unknown key "max_lbs" in a rule of kind "error"
//         max_lbs = 0.5
//         ^
//       did you mean max_lsb?
//
// Lines and columns count from 1, columns in code points, as editors show them.
#pragma once

#include <compare>
#include <cstddef>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace halflsb {

/// Where in which file. A plan may be spread over several: `source` counts them in the order in which they
/// were opened (Problems::add_source), 0 is the file that was asked for.
struct Place {
    int line = 1;
    int column = 1;
    int source = 0;
    bool operator==(const Place&) const = default;
    std::strong_ordering operator<=>(const Place& other) const {
        if (const auto order = source <=> other.source; order != 0) return order;
        if (const auto order = line <=> other.line; order != 0) return order;
        return column <=> other.column;
    }
};

/// The offending line is cut to this many columns, around the caret.
inline constexpr std::size_t shown_line_columns = 120;

class SourceText {
public:
    /// `name` is what messages call the file. A byte order mark in front is dropped; neither it nor
    /// the line endings (LF or CR LF) count as columns.
    SourceText(std::string name, std::string bytes);

    const std::string& name() const { return name_; }
    const std::string& bytes() const { return bytes_; }
    /// The line without its ending; "" outside the text.
    std::string_view line(int number) const;
    /// At least 1; a line break at the very end starts no further line.
    int line_count() const;
    Place place_of_byte(std::size_t offset) const;

    /// The whole message. `remedy` may be empty. Control characters are shown harmless.
    std::string render(Place place, std::string_view problem, std::string_view remedy) const;

    /// The first thing that makes the bytes no text, rendered: a NUL, or bytes that are no UTF-8.
    std::optional<std::string> not_text() const;

private:
    std::string name_, bytes_;
    std::vector<std::size_t> line_starts_;
};

/// A message about a file that has no lines to show.
std::string render_without_line(std::string_view file, std::string_view problem, std::string_view remedy);

/// "text" in quotes for a message: harmless on a terminal and not longer than 60 columns.
std::string quoted(std::string_view text);

}  // namespace halflsb
