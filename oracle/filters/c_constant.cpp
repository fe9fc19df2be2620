// Numbers as C writes them, and what an element of an array makes of one.
#include <charconv>
#include <cmath>

#include "oracle/filters/c_type.hpp"

namespace halflsb {

namespace {

constexpr std::uint64_t exact_integers = std::uint64_t{1} << 53;
constexpr std::string_view how = "write a decimal, hexadecimal or octal integer, or a floating constant, as C has them";

CComplaint no_number(std::string_view text) {
    return {quoted_from_file(text) + " is no number in C", std::string(how)};
}

bool is_real_text(std::string_view text, bool is_hex) {
    return text.find_first_of(is_hex ? ".pP" : ".eE") != std::string_view::npos;
}

template <class T>
std::optional<T> parsed(std::string_view digits, std::chars_format format) {
    T number{};
    const auto [end, failure] = std::from_chars(digits.data(), digits.data() + digits.size(), number, format);
    if (failure != std::errc() || end != digits.data() + digits.size()) return std::nullopt;
    return number;
}

std::variant<CValue, CComplaint> real_constant(std::string_view text, bool is_hex) {
    std::string_view digits = is_hex ? text.substr(2) : text;
    // C wants the exponent of a hexadecimal one; from_chars would do without.
    if (is_hex && digits.find_first_of("pP") == std::string_view::npos) return no_number(text);
    CValue value;
    value.is_real = true;
    if (digits.ends_with('l') || digits.ends_with('L')) {
        return CComplaint{quoted_from_file(text) + " is a long double, whose width depends on the processor",
                          "write it without the suffix " + std::string(1, digits.back())};
    }
    value.is_real32 = digits.ends_with('f') || digits.ends_with('F');
    if (value.is_real32) digits.remove_suffix(1);
    const auto format = is_hex ? std::chars_format::hex : std::chars_format::general;
    std::optional<double> number;
    if (value.is_real32) {
        if (const auto single = parsed<float>(digits, format)) number = static_cast<double>(*single);
    } else {
        number = parsed<double>(digits, format);
    }
    if (!number || !std::isfinite(*number)) return no_number(text);
    value.real = *number;
    return value;
}

/// u, l, ul, lu, ll, ull, llu in either case; C takes no lL.
bool take_suffix(std::string_view& digits, bool& is_unsigned, bool& is_long) {
    const std::size_t first = digits.find_first_of("uUlL");
    if (first == std::string_view::npos) return true;
    std::string_view suffix = digits.substr(first);
    digits = digits.substr(0, first);
    const auto take_u = [&] {
        if (!suffix.starts_with('u') && !suffix.starts_with('U')) return false;
        suffix.remove_prefix(1);
        return is_unsigned = true;
    };
    const auto take_l = [&] {
        for (const std::string_view l : {"ll", "LL", "l", "L"}) {
            if (!suffix.starts_with(l)) continue;
            suffix.remove_prefix(l.size());
            return is_long = true;
        }
        return false;
    };
    if (take_u()) {
        take_l();
    } else if (take_l()) {
        take_u();
    }
    return suffix.empty();
}

std::variant<CValue, CComplaint> integer_constant(std::string_view text) {
    std::string_view digits = text;
    CValue value;
    bool is_long = false;
    int base = 10;
    if (text.starts_with("0x") || text.starts_with("0X")) {
        base = 16;
    } else if (text.starts_with("0b") || text.starts_with("0B")) {
        base = 2;
    } else if (text.size() > 1 && text.front() == '0') {
        base = 8;
    }
    if (base == 16 || base == 2) digits.remove_prefix(2);
    if (!take_suffix(digits, value.is_unsigned, is_long) || digits.empty()) return no_number(text);
    const auto [end, failure] = std::from_chars(digits.data(), digits.data() + digits.size(), value.magnitude, base);
    if (failure == std::errc::result_out_of_range)
        return CComplaint{quoted_from_file(text) + " is beyond 64 bits", "a coefficient has at most 64 bits"};
    if (failure != std::errc() || end != digits.data() + digits.size()) {
        if (base == 8)
            return CComplaint{quoted_from_file(text) + " begins with 0, so C reads it as octal",
                              "leave the leading 0 out if it is decimal"};
        return no_number(text);
    }
    value.is_bits = base != 10 && value.magnitude != 0;
    // Types of constants: C11 6.4.4.1. Decimal ones stay signed, the others become unsigned where they no longer fit.
    if (base != 10 && !is_long && value.magnitude > 0x7fffffffU && value.magnitude <= 0xffffffffU)
        value.is_unsigned = true;
    if (value.magnitude > static_cast<std::uint64_t>(INT64_MAX)) value.is_unsigned = true;
    value.real = static_cast<double>(value.magnitude);
    return value;
}

/// A whole number with its sign, exact where a double is not.
struct Whole {
    bool is_negative = false;
    std::uint64_t magnitude = 0;
    bool operator==(const Whole&) const = default;
};

/// The bits as a word of that many bits, two's complement.
Whole as_signed(std::uint64_t bits, int word_bits) {
    if (bits >> (word_bits - 1) == 0) return {false, bits};
    return {true, word_bits == 64 ? std::uint64_t{0} - bits : (std::uint64_t{1} << word_bits) - bits};
}

bool fits_word(std::uint64_t bits, int word_bits) { return word_bits >= 64 || bits >> word_bits == 0; }

std::string range_of(const CType& type) {
    const int bits = type.is_signed ? type.bits - 1 : type.bits;
    std::string top = "2^" + std::to_string(bits) + " - 1",
                bottom = type.is_signed ? "-2^" + std::to_string(bits) : "0";
    if (bits <= 32) {
        top = std::to_string((std::int64_t{1} << bits) - 1);
        if (type.is_signed) bottom = "-" + std::to_string(std::int64_t{1} << bits);
    }
    return "from " + bottom + " to " + top;
}

std::variant<double, CComplaint> stored_in_word(const CType& type, const CValue& value, std::string_view written) {
    const std::string what = quoted_from_file(written);
    const CComplaint beyond{what + " does not fit " + type.name, "give a number " + range_of(type)};
    if (value.is_real) {
        if (value.real != std::trunc(value.real) || std::fabs(value.real) > 0x1p53) {
            return CComplaint{what + " in an array of " + type.name + " loses its fraction",
                              "write the integer that the firmware is to have"};
        }
        CValue whole;
        whole.is_negative = value.real < 0.0;
        whole.magnitude = static_cast<std::uint64_t>(std::fabs(value.real));
        whole.real = std::fabs(value.real);
        return stored_in_word(type, whole, written);
    }
    if (type.is_char && (value.is_negative || value.magnitude > 127)) {
        return CComplaint{what + " in a char is negative on one processor and positive on another",
                          "give the array the type int8_t or uint8_t"};
    }
    Whole stored{value.is_negative, value.magnitude};
    if (value.is_negative) {
        if (!type.is_signed && value.magnitude != 0) return beyond;
        if (type.is_signed && value.magnitude > std::uint64_t{1} << (type.bits - 1)) return beyond;
    } else if (!type.is_signed) {
        if (!fits_word(value.magnitude, type.bits)) return beyond;
    } else if (value.is_bits) {
        if (!fits_word(value.magnitude, type.bits)) return beyond;
        stored = as_signed(value.magnitude, type.bits);
        if (fits_word(value.magnitude, type.least_bits) && as_signed(value.magnitude, type.least_bits) != stored) {
            return CComplaint{what + " in " + type.name + " is negative where it has " +
                                  std::to_string(type.least_bits) + " bits, positive where it has " +
                                  std::to_string(type.bits),
                              "give the array a type of stated width, or write file_word_bits in the plan"};
        }
    } else {
        if (value.magnitude >> (type.bits - 1) != 0) return beyond;
    }
    if (stored.magnitude > exact_integers) {
        return CComplaint{what + " has more than the 53 bits that a reference in double can hold",
                          "give coefficients of at most 53 bits"};
    }
    const auto number = static_cast<double>(stored.magnitude);
    return stored.is_negative ? -number : number;
}

}  // namespace

std::variant<CValue, CComplaint> c_constant(std::string_view text) {
    if (text.find('\'') != std::string_view::npos) {
        // Between two digits each, or it is none.
        const bool is_good = text.back() != '\'' && text.find("''") == std::string_view::npos &&
                             text.find("x'") == std::string_view::npos && text.find("X'") == std::string_view::npos;
        std::string digits(text);
        std::erase(digits, '\'');
        return is_good ? c_constant(digits) : no_number(text);
    }
    const bool is_hex = text.starts_with("0x") || text.starts_with("0X");
    return is_real_text(text, is_hex) ? real_constant(text, is_hex) : integer_constant(text);
}

std::variant<double, CComplaint> stored_in(const CType& type, const CValue& value, std::string_view written) {
    const std::string what = quoted_from_file(written);
    if (type.kind == CType::Kind::integer) return stored_in_word(type, value, written);
    if (type.kind == CType::Kind::unusable)
        return CComplaint{"elements of type " + type.name + " are not read",
                          "name an array of integers, float or double"};
    if (!value.is_real && value.magnitude > exact_integers) {
        return CComplaint{what + " has more than the 53 bits that a reference in double can hold",
                          "give coefficients of at most 53 bits"};
    }
    if (type.kind == CType::Kind::unknown && value.is_bits && !value.is_real) {
        for (const int bits : {8, 16, 32}) {
            if (value.magnitude >> (bits - 1) != 1) continue;
            return CComplaint{what + " could mean a negative number, and the type " + type.name +
                                  " does not say how wide its words are",
                              "write file_word_bits in the plan, or the number as decimal"};
        }
    }
    const double number = value.is_real ? value.real : value.is_negative ? -value.real : value.real;
    if (type.kind != CType::Kind::real32) return number;
    const auto rounded = static_cast<double>(static_cast<float>(number));
    if (!std::isfinite(rounded)) return CComplaint{what + " does not fit float", "give the array the type double"};
    return rounded;
}

}  // namespace halflsb
