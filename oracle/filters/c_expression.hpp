// The constant expressions that stand in tables of coefficients and in the sizes of arrays: numbers, signs,
// parentheses, casts, names of #define, and + - * / % << >> of small integers. Private to this room.
#pragma once

#include <variant>

#include "oracle/filters/c_type.hpp"

namespace halflsb {

/// Where one is in a list of tokens, which ends with Kind::end.
struct CCursor {
    const std::vector<CToken>* tokens = nullptr;
    std::size_t index = 0;

    const CToken& token() const { return (*tokens)[index]; }
    const CToken& behind(std::size_t count = 1) const {
        return (*tokens)[index + count < tokens->size() ? index + count : tokens->size() - 1];
    }
    void advance() {
        if (token().kind != CToken::Kind::end) ++index;
    }
};

/// The text from the first token up to the one before `end`, which stands behind it in the same list.
std::string_view written_between(const CCursor& first, const CCursor& end);

class CExpression {
public:
    explicit CExpression(const CSource& source) : source_(source) {}

    /// Reads from the cursor on, which then stands behind it. Refused is what is more than the above, with its place.
    std::variant<CValue, FileProblem> read(CCursor& cursor);

private:
    using Read = std::variant<CValue, FileProblem>;
    Read sum(CCursor& cursor, int least_rank, int depth);
    Read signed_value(CCursor& cursor, int depth);
    Read primary(CCursor& cursor, int depth);
    Read cast(CCursor& cursor, int depth);
    Read macro(CCursor& cursor, int depth);

    const CSource& source_;
    int work_ = 0;
};

}  // namespace halflsb
