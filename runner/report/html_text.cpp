#include "runner/report/html_text.hpp"

#include <array>
#include <charconv>
#include <cmath>
#include <cstdint>

#include "runner/world/printable.hpp"

namespace halflsb {
namespace {

void append_unit(std::string& out, std::uint32_t unit) {
    constexpr std::string_view digits = "0123456789abcdef";
    out += "\\u";
    for (int shift = 12; shift >= 0; shift -= 4) out += digits[(unit >> shift) & 15];
}

/// Of a well-formed sequence of 2 to 4 bytes.
std::uint32_t code_point_of(std::string_view sequence) {
    std::uint32_t code_point = static_cast<std::uint8_t>(sequence[0]) & (0x7Fu >> sequence.size());
    for (const char c : sequence.substr(1)) code_point = (code_point << 6) | (static_cast<std::uint8_t>(c) & 0x3Fu);
    return code_point;
}

}  // namespace

std::string html_text(std::string_view text) {
    std::string out;
    for (const char c : printable_lines(text)) {
        switch (c) {
            case '&':
                out += "&amp;";
                break;
            case '<':
                out += "&lt;";
                break;
            case '>':
                out += "&gt;";
                break;
            case '"':
                out += "&quot;";
                break;
            case '\'':
                out += "&#39;";
                break;
            default:
                out += c;
        }
    }
    return out;
}

std::string html_element(std::string_view name, std::string_view words, std::string_view text) {
    std::string out = "<" + std::string(name);
    if (!words.empty()) out += " class=\"" + std::string(words) + "\"";
    return out + ">" + html_text(text) + "</" + std::string(name) + ">";
}

std::string script_string(std::string_view text) {
    const std::string clean = printable_lines(text);
    std::string out = "\"";
    for (std::string_view rest = clean; !rest.empty();) {
        const std::size_t bytes = utf8_sequence_bytes(rest);
        const char c = rest[0];
        if (bytes > 1) {
            const std::uint32_t code_point = code_point_of(rest.substr(0, bytes));
            if (code_point >= 0x10000) {
                append_unit(out, 0xD800 + ((code_point - 0x10000) >> 10));
                append_unit(out, 0xDC00 + ((code_point - 0x10000) & 0x3FF));
            } else {
                append_unit(out, code_point);
            }
        } else if (c < ' ' || c == '"' || c == '\\' || c == '<' || c == '>' || c == '&' || c == '\'' || c == '/') {
            append_unit(out, static_cast<std::uint8_t>(c));
        } else {
            out += c;
        }
        rest.remove_prefix(bytes);
    }
    return out + "\"";
}

std::string script_number(double value, int digits) {
    if (!std::isfinite(value)) return "null";
    std::array<char, 64> text;
    char* const end = text.data() + text.size();
    constexpr double largest_whole = 9007199254740992.0;
    if (value == std::trunc(value) && std::fabs(value) < largest_whole)
        return std::to_string(static_cast<std::int64_t>(value));
    return std::string(text.data(), std::to_chars(text.data(), end, value, std::chars_format::general, digits).ptr);
}

std::string number_attribute(double value) {
    if (!std::isfinite(value)) return "";
    std::array<char, 64> text;
    return std::string(text.data(), std::to_chars(text.data(), text.data() + text.size(), value).ptr);
}

}  // namespace halflsb
