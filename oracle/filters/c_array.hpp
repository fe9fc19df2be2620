// A table of coefficients in the firmware's own C or C++ source: the numbers that a compiler would store.
//
// Read are array initialisers with constants: integers, floats, signs, parentheses, casts, names of #define,
// zero-filled ends, rows in braces (two dimensions, or an array of structs, whose members then stand in their order), a
// std::array, one struct, and a bare list without a declaration. It is no compiler: designated initialisers, calls of
// macros, sizes that another file defines, a second array of the same name and lines of the preprocessor inside an
// array are refused at their place. A narrowing that C would do in silence (40000 in an int16_t, 0.5 in an int) is
// refused too.
#pragma once

#include <optional>
#include <string>
#include <string_view>

#include "oracle/filters/coefficient_table.hpp"

namespace halflsb {

struct CArrayWish {
    std::string name = {};              ///< "": the only one of the file
    std::optional<int> word_bits = {};  ///< of integers whose type does not say it, 8 .. 64
    /// The size of the array is not looked at where this file does not define it: the caller knows the count.
    bool count_is_known = false;
};

/// O(length of the text), some 20 MB a second; bounded as coefficient_table.hpp and c_tokens.hpp say.
ReadTable read_c_array(std::string_view text, const CArrayWish& wish);

}  // namespace halflsb
