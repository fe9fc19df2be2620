#include "oracle/filters/c_type.hpp"

#include <algorithm>
#include <array>

namespace halflsb {

namespace {

// A type that is named in more steps than these is one of another world.
constexpr int most_aliases = 8, most_lookups = 100;

CType word(std::string_view name, int bits, bool is_signed, int least_bits = 0) {
    return {CType::Kind::integer, std::string(name), is_signed, false, bits, least_bits == 0 ? bits : least_bits};
}

/// Types that have one name: those of <stdint.h>, and those that signal libraries for microcontrollers use.
std::optional<CType> standard_type(std::string_view name) {
    constexpr std::array<std::string_view, 4> bits = {"8", "16", "32", "64"};
    for (const std::string_view width : bits) {
        const int number = width == "8" ? 8 : width == "16" ? 16 : width == "32" ? 32 : 64;
        const std::string end = std::string(width) + "_t";
        if (name == "int" + end) return word(name, number, true);
        if (name == "uint" + end) return word(name, number, false);
        if (name == "q" + std::to_string(number - 1) + "_t") return word(name, number, true);
    }
    if (name == "float" || name == "float32_t") return CType{CType::Kind::real32, std::string(name)};
    if (name == "double" || name == "float64_t") return CType{CType::Kind::real64, std::string(name)};
    return std::nullopt;
}

constexpr std::array<std::string_view, 6> integer_words = {"char", "short", "int", "long", "signed", "unsigned"};
constexpr std::array<std::string_view, 14> strange_words = {
    "_Bool",    "bool",   "_Complex", "_Fract",     "_Accum",     "_Sat",       "__fp16",
    "_Float16", "__bf16", "wchar_t",  "_Decimal32", "_Decimal64", "__float128", "_BitInt"};
constexpr std::array<std::string_view, 14> qualifiers = {
    "const",    "static",   "volatile", "extern", "constexpr", "constinit", "inline",
    "register", "restrict", "auto",     "std",    "alignas",   "_Alignas",  "__attribute__"};

template <std::size_t n>
bool is_one_of(const std::array<std::string_view, n>& words, std::string_view word) {
    return std::find(words.begin(), words.end(), word) != words.end();
}

CType unusable(std::string name) { return {CType::Kind::unusable, std::move(name)}; }

/// char, short, int, long, signed, unsigned, float and double, in any order.
CType built_in_type(const std::vector<std::string_view>& names) {
    std::string name;
    const auto count = [&](std::string_view word) { return std::count(names.begin(), names.end(), word); };
    for (const std::string_view word : names) name += (name.empty() ? "" : " ") + std::string(word);
    if (count("double") + count("float") > 0) {
        if (names.size() != 1) return unusable(name);
        return *standard_type(names.front());
    }
    const bool is_signed = count("unsigned") == 0;
    if (count("char") > 0) {
        CType type = word(name, 8, is_signed);
        type.is_char = is_signed && count("signed") == 0;
        return type;
    }
    if (count("short") > 0) return word(name, 16, is_signed);
    if (count("long") > 1) return word(name, 64, is_signed);
    if (count("long") > 0) return word(name, 64, is_signed, 32);
    return word(name, 32, is_signed, 16);
}

class TypeReader {
public:
    explicit TypeReader(const CSource& source) : source_(source) {}

    CType read(const std::vector<CToken>& words, int depth) const {
        std::vector<std::string_view> built_in;
        std::optional<CType> found;
        std::string last;
        int parentheses = 0;
        for (std::size_t i = 0; i < words.size(); ++i) {
            const CToken& token = words[i];
            // What stands in the parentheses of an attribute or an alignment is no type.
            if (token.is("(")) ++parentheses;
            if (token.is(")")) --parentheses;
            if (parentheses > 0 || token.kind == CToken::Kind::end) continue;
            if (token.is("*") || token.is("&")) return unusable("pointer");
            if (token.kind != CToken::Kind::name || is_one_of(qualifiers, token.text)) continue;
            if (token.is("struct") || token.is("union") || token.is("enum") || token.is("class"))
                return {CType::Kind::unknown, std::string(token.text) + name_behind(words, i)};
            if (is_one_of(strange_words, token.text)) return unusable(std::string(token.text));
            last = token.text;
            if (is_one_of(integer_words, token.text) || token.is("float") || token.is("double")) {
                built_in.push_back(token.text);
            } else if (auto type = named(token.text, depth)) {
                found = std::move(type);
            }
        }
        if (!built_in.empty()) return built_in_type(built_in);
        if (found) return *found;
        return {CType::Kind::unknown, last.empty() ? "without a name" : quoted_from_file(last)};
    }

    std::optional<CType> named(std::string_view name, int depth) const {
        if (auto type = standard_type(name)) return type;
        if (depth >= most_aliases || ++lookups_ > most_lookups) return std::nullopt;
        // #define coefficient_t int16_t
        if (const auto macro = source_.macros.find(name); macro != source_.macros.end()) {
            const CMacro& only = macro->second.front();
            if (macro->second.size() != 1 || only.is_function || only.is_undefined || only.body.size() < 2)
                return std::nullopt;
            for (const CToken& token : only.body) {
                if (token.kind != CToken::Kind::name && token.kind != CToken::Kind::end) return std::nullopt;
            }
            return known(read(only.body, depth + 1));
        }
        // typedef int16_t coefficient_t;
        const auto alias = source_.type_names.find(name);
        return alias == source_.type_names.end() ? std::nullopt : known(read(alias->second, depth + 1));
    }

private:
    static std::optional<CType> known(CType type) {
        return type.kind == CType::Kind::unknown ? std::nullopt : std::optional(std::move(type));
    }
    static std::string name_behind(const std::vector<CToken>& words, std::size_t at) {
        return at + 1 < words.size() && words[at + 1].kind == CToken::Kind::name ? " " + std::string(words[at + 1].text)
                                                                                 : std::string();
    }

    const CSource& source_;
    mutable int lookups_ = 0;
};

}  // namespace

CType c_type_of(const std::vector<CToken>& words, const CSource& source) { return TypeReader(source).read(words, 0); }

std::optional<CType> c_type_named(std::string_view name, const CSource& source) {
    return TypeReader(source).named(name, 0);
}

bool is_c_type_word(std::string_view word) {
    return is_one_of(integer_words, word) || word == "float" || word == "double" || is_one_of(strange_words, word);
}

}  // namespace halflsb
