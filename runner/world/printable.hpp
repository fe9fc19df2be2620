// Text that came from a plan, a board or a file, made harmless before it is shown or written.
//
// A case name or a board's serial may hold anything: an escape sequence that repaints the terminal,
// a byte that is no UTF-8, a sign that turns the direction of the line. Nothing of that reaches a
// terminal, a log or a report unescaped.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>

namespace halflsb {

/// One line of text: control characters and bytes that are no UTF-8 become "\x1b", signs that turn
/// the direction of text or break a line become "\u202e"; everything else stays.
std::string printable(std::string_view text);

/// The same, but line breaks stay and a tab becomes a blank: for a message of several lines.
std::string printable_lines(std::string_view text);

/// Valid UTF-8: every byte that does not belong to a well-formed sequence (Unicode 15, table 3-7)
/// becomes U+FFFD.
std::string valid_utf8(std::string_view text);

/// Columns on a terminal, one per code point; `text` must be valid UTF-8. Signs of double width
/// count as one, so a line holding them may be cut a little late.
std::size_t columns_of(std::string_view text);

/// The first `columns` code points of `text`.
std::string_view first_columns(std::string_view text, std::size_t columns);

/// Length in bytes of the well-formed UTF-8 sequence that `text` starts with; 0 when there is none.
std::size_t utf8_sequence_bytes(std::string_view text);

}  // namespace halflsb
