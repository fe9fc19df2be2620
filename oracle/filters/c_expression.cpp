#include "oracle/filters/c_expression.hpp"

#include <algorithm>
#include <array>
#include <cmath>

namespace halflsb {

namespace {

constexpr int deepest = 32;
/// Steps of one expression, the macros in it included.
constexpr int most_work = 1000;
constexpr std::int64_t largest_int = 0x7fffffff;
constexpr std::string_view write_number = "write the number that the firmware is to have";

FileProblem refused(const CToken& token, std::string problem, std::string_view remedy) {
    return {token.at, {}, std::move(problem), std::string(remedy)};
}

/// 0: no operator that stands between two numbers.
int rank_of(const CCursor& cursor) {
    const CToken& token = cursor.token();
    if (token.is("*") || token.is("/") || token.is("%")) return 3;
    if (token.is("+") || token.is("-")) return 2;
    const bool is_shift =
        (token.is("<") || token.is(">")) && cursor.behind().is(token.text) && cursor.behind().at == token.at + 1;
    return is_shift ? 1 : 0;
}

std::int64_t signed_of(const CValue& value) {
    const auto magnitude = static_cast<std::int64_t>(value.magnitude);
    return value.is_negative ? -magnitude : magnitude;
}

CValue value_of(std::int64_t number) {
    CValue value;
    value.is_negative = number < 0;
    value.magnitude = static_cast<std::uint64_t>(number < 0 ? -number : number);
    value.real = static_cast<double>(value.magnitude);
    return value;
}

/// In the int of C, whose overflow has no meaning.
std::variant<CValue, FileProblem> combined(const CToken& sign, const CValue& left, const CValue& right) {
    for (const CValue* value : {&left, &right}) {
        if (value->is_real)
            return refused(sign, "a calculation with fractions, which compilers may round differently", write_number);
        if (value->is_unsigned || value->magnitude > static_cast<std::uint64_t>(largest_int))
            return refused(sign, "a calculation beyond the range of int", write_number);
    }
    const std::int64_t a = signed_of(left), b = signed_of(right);
    const bool is_shift = sign.is("<") || sign.is(">");
    if (is_shift && (a < 0 || b < 0 || b > 30))
        return refused(sign, "a shift of a negative number, or by more than 30 bits", write_number);
    if ((sign.is("/") || sign.is("%")) && b == 0) return refused(sign, "a division by 0", write_number);
    std::int64_t result = 0;
    switch (sign.text.front()) {
        case '+':
            result = a + b;
            break;
        case '-':
            result = a - b;
            break;
        case '*':
            result = a * b;
            break;
        case '/':
            result = a / b;
            break;
        case '%':
            result = a % b;
            break;
        case '<':
            result = a << b;
            break;
        default:
            result = a >> b;
    }
    if (result > largest_int || result < -largest_int - 1)
        return refused(sign, "a calculation beyond the range of int", write_number);
    return value_of(result);
}

/// INT16_C(5) and its like only give the constant a type.
bool is_constant_macro(std::string_view name) {
    constexpr std::array<std::string_view, 10> names = {"INT8_C",  "INT16_C",  "INT32_C",  "INT64_C",  "INTMAX_C",
                                                        "UINT8_C", "UINT16_C", "UINT32_C", "UINT64_C", "UINTMAX_C"};
    return std::find(names.begin(), names.end(), name) != names.end();
}

}  // namespace

std::string_view written_between(const CCursor& first, const CCursor& end) {
    if (end.index <= first.index) return first.token().text;
    const std::string_view last = (*end.tokens)[end.index - 1].text;
    return {first.token().text.data(), static_cast<std::size_t>(last.data() + last.size() - first.token().text.data())};
}

CExpression::Read CExpression::read(CCursor& cursor) {
    work_ = 0;
    return sum(cursor, 1, 0);
}

CExpression::Read CExpression::sum(CCursor& cursor, int least_rank, int depth) {
    Read left = signed_value(cursor, depth + 1);
    while (std::holds_alternative<CValue>(left)) {
        const int rank = rank_of(cursor);
        if (rank < least_rank || rank == 0) return left;
        const CToken sign = cursor.token();
        cursor.advance();
        if (rank == 1) cursor.advance();
        const Read right = sum(cursor, rank + 1, depth + 1);
        if (std::holds_alternative<FileProblem>(right)) return right;
        left = combined(sign, std::get<CValue>(left), std::get<CValue>(right));
    }
    return left;
}

CExpression::Read CExpression::signed_value(CCursor& cursor, int depth) {
    const CToken token = cursor.token();
    if (depth > deepest || ++work_ > most_work) return refused(token, "this expression is too deep", write_number);
    if (token.is("~") || token.is("!"))
        return refused(token, quoted_from_file(token.text) + " changes the bits of a number", write_number);
    if (!token.is("+") && !token.is("-")) return primary(cursor, depth + 1);
    cursor.advance();
    Read read = signed_value(cursor, depth + 1);
    auto* value = std::get_if<CValue>(&read);
    if (value == nullptr || token.is("+")) return read;
    if (value->is_unsigned)
        return refused(token, "a minus before an unsigned number, which stays positive in C", write_number);
    if (value->is_real) {
        value->real = -value->real;
    } else {
        value->is_negative = !value->is_negative && value->magnitude != 0;
        // It is a number now: -0x8000 is -32768 in any word.
        value->is_bits = false;
    }
    return read;
}

CExpression::Read CExpression::primary(CCursor& cursor, int depth) {
    const CToken token = cursor.token();
    if (token.kind == CToken::Kind::number) {
        cursor.advance();
        auto constant = c_constant(token.text);
        if (auto* complaint = std::get_if<CComplaint>(&constant))
            return refused(token, std::move(complaint->problem), complaint->remedy);
        return std::get<CValue>(constant);
    }
    if (token.is("(")) {
        if (const CToken& inner = cursor.behind(); inner.kind == CToken::Kind::name) {
            const bool is_type = is_c_type_word(inner.text) || inner.is("const") || inner.is("std") ||
                                 inner.is("struct") || c_type_named(inner.text, source_).has_value();
            if (is_type) return cast(cursor, depth + 1);
        }
        cursor.advance();
        Read inner = sum(cursor, 1, depth + 1);
        if (std::holds_alternative<FileProblem>(inner)) return inner;
        if (!cursor.token().is(")")) return refused(cursor.token(), "a ) is missing here", write_number);
        cursor.advance();
        return inner;
    }
    if (token.kind == CToken::Kind::name) return macro(cursor, depth + 1);
    if (token.kind == CToken::Kind::directive) {
        return refused(token, quoted_from_file(token.text) + " stands inside the array",
                       "give the file as the compiler sees it, without lines of the preprocessor in the array");
    }
    if (token.kind == CToken::Kind::text)
        return refused(token, quoted_from_file(token.text) + " is no number", "name an array of numbers");
    if (token.kind == CToken::Kind::end) return refused(token, "a number is missing at the end", "is the file whole?");
    return refused(token, "a number is missing before " + quoted_from_file(token.text),
                   "write numbers between commas, as C has them");
}

CExpression::Read CExpression::cast(CCursor& cursor, int depth) {
    const CToken open = cursor.token();
    cursor.advance();
    std::vector<CToken> words;
    while (!cursor.token().is(")") && cursor.token().kind != CToken::Kind::end && words.size() < 16) {
        words.push_back(cursor.token());
        cursor.advance();
    }
    if (!cursor.token().is(")")) return refused(open, "a ) is missing behind this cast", write_number);
    cursor.advance();
    const CType type = c_type_of(words, source_);
    const CCursor first = cursor;
    Read operand = signed_value(cursor, depth + 1);
    auto* value = std::get_if<CValue>(&operand);
    if (value == nullptr) return operand;
    if (type.kind == CType::Kind::unknown)
        return refused(open, "a cast to " + type.name + ", which is not known in this file", write_number);
    auto stored = stored_in(type, *value, written_between(first, cursor));
    if (auto* complaint = std::get_if<CComplaint>(&stored))
        return refused(open, std::move(complaint->problem), complaint->remedy);
    const double number = std::get<double>(stored);
    CValue made;
    if (type.kind == CType::Kind::integer) {
        made = value_of(static_cast<std::int64_t>(number));
        // (uint16_t)0xFFFF in an array of int16_t is -1, as without the cast; narrower than int it is no unsigned.
        made.is_bits = !type.is_signed && value->is_bits;
        made.is_unsigned = !type.is_signed && type.bits >= 32;
    } else {
        made.is_real = true;
        made.real = number;
        made.is_real32 = type.kind == CType::Kind::real32;
    }
    return made;
}

CExpression::Read CExpression::macro(CCursor& cursor, int depth) {
    const CToken name = cursor.token();
    const std::string shown = quoted_from_file(name.text);
    cursor.advance();
    if (cursor.token().is("(")) {
        if (!is_constant_macro(name.text)) {
            return refused(name, shown + " is called here, and what it gives is the compiler's to say",
                           "write the numbers that it gives, or print them by a program into a file of numbers");
        }
        Read inner = primary(cursor, depth + 1);
        auto* value = std::get_if<CValue>(&inner);
        if (value != nullptr && name.text.starts_with('U')) value->is_unsigned = true;
        return inner;
    }
    const auto found = source_.macros.find(name.text);
    if (found == source_.macros.end() || found->second.front().at > name.at) {
        return refused(name, shown + " is not known in this file",
                       "write the number, or #define it as a number before the array");
    }
    if (found->second.size() > 1) {
        return refused(name, shown + " is defined more than once, so its value depends on what is compiled",
                       "write the number, or keep one #define");
    }
    const CMacro& only = found->second.front();
    if (only.is_function || only.is_undefined)
        return refused(name, shown + " is no number of this file", "write the number");
    CCursor body{&only.body, 0};
    Read value = signed_value(body, depth + 1);
    if (auto* problem = std::get_if<FileProblem>(&value)) {
        // Told where it is used: a reader of the array looks there.
        problem->byte = name.at;
        problem->problem = shown + " stands for no number: " + problem->problem;
        return value;
    }
    if (body.token().kind != CToken::Kind::end)
        return refused(name, shown + " stands for more than one number",
                       "put its text into parentheses, or write the number");
    return value;
}

}  // namespace halflsb
