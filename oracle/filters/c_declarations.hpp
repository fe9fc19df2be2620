// The arrays of a C source that have an initialiser. Private to this room.
#pragma once

#include <string_view>
#include <vector>

#include "oracle/filters/c_expression.hpp"

namespace halflsb {

struct CDeclaration {
    CToken name;
    std::vector<CToken> type;                ///< the words in front of the name; of a std::array its element type
    std::vector<std::vector<CToken>> sizes;  ///< of each [...]; empty where nothing stands in it
    bool is_array = true;                    ///< else one struct
    bool is_std_array = false;               ///< its elements may stand in doubled braces
    CCursor initialiser;                     ///< at its {
};

/// In the order of the file. The source must outlive them.
std::vector<CDeclaration> c_declarations(const CSource& source);

}  // namespace halflsb
