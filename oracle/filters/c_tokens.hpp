// The words of a C or C++ source, as far as tables of numbers need them: comments, line continuations, strings and
// the preprocessor's lines are understood, nothing is expanded. Private to this room.
#pragma once

#include <cstddef>
#include <map>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "oracle/filters/coefficient_table.hpp"

namespace halflsb {

struct CToken {
    enum class Kind {
        name,
        number,  ///< a preprocessing number: whatever begins with a digit
        text,    ///< a string or a character, its quotation marks included
        mark,    ///< one character of punctuation
        /// A line of the preprocessor that decides what is compiled, or brings in another file: "#if".
        directive,
        end,
    };
    Kind kind = Kind::end;
    std::string_view text;
    std::size_t at = 0;  ///< byte of the source

    bool is(std::string_view wanted) const { return kind != Kind::text && text == wanted; }
};

struct CMacro {
    std::size_t at = 0;
    std::vector<CToken> body;   ///< ends with Kind::end
    bool is_function = false;   ///< takes arguments
    bool is_undefined = false;  ///< #undef
};

struct CSource {
    std::vector<CToken> tokens;  ///< ends with Kind::end
    /// In the order of the file; one name may be defined several times, in alternatives of an #if.
    std::map<std::string, std::vector<CMacro>, std::less<>> macros;
    /// The words of `typedef int16_t coefficient;` by the name; empty of one that is defined twice.
    std::map<std::string, std::vector<CToken>, std::less<>> type_names;
};

/// What stands in `#if 0` is left out, as is the other half of an `#if 1`; of every other #if both halves are kept,
/// with a directive between them. The views point into `text`. Refused are more than a million words, and what
/// leaves open where words end: an unclosed comment or string, a raw string, an #if without its #endif.
std::variant<CSource, FileProblem> read_c_tokens(std::string_view text);

}  // namespace halflsb
