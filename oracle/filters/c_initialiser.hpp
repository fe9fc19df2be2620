// What stands between the braces of an array, as the numbers that its elements hold. Private to this room.
#pragma once

#include "oracle/filters/c_array.hpp"
#include "oracle/filters/c_declarations.hpp"

namespace halflsb {

/// Rows, sizes and zero-filled ends as c_array.hpp says.
ReadTable read_c_initialiser(const CSource& source, const CDeclaration& declaration, const CArrayWish& wish);

/// A file of numbers between commas, rows in braces, and nothing else.
ReadTable read_bare_c_list(const CSource& source, const CArrayWish& wish);

}  // namespace halflsb
