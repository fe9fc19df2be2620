#include "runner/world/printable.hpp"

#include <cstdint>

namespace halflsb {

namespace {

constexpr std::string_view hex_digits = "0123456789abcdef";

std::uint8_t byte_at(std::string_view text, std::size_t index) { return static_cast<std::uint8_t>(text[index]); }

void append_byte_escape(std::string& out, std::uint8_t byte) {
    out += "\\x";
    out += hex_digits[byte >> 4];
    out += hex_digits[byte & 15];
}

void append_code_point_escape(std::string& out, std::uint32_t code_point) {
    out += "\\u";
    for (int shift = 12; shift >= 0; shift -= 4) out += hex_digits[(code_point >> shift) & 15];
}

/// Of a well-formed sequence of `bytes` bytes.
std::uint32_t code_point_of(std::string_view text, std::size_t bytes) {
    const std::uint8_t first = byte_at(text, 0);
    if (bytes == 1) return first;
    std::uint32_t code_point = first & (0x7Fu >> bytes);
    for (std::size_t i = 1; i < bytes; ++i) code_point = (code_point << 6) | (byte_at(text, i) & 0x3Fu);
    return code_point;
}

/// Line separators, marks that turn or isolate a direction, and the byte order mark.
bool misleads(std::uint32_t code_point) {
    return (code_point >= 0x200B && code_point <= 0x200F) || (code_point >= 0x2028 && code_point <= 0x202E) ||
           (code_point >= 0x2060 && code_point <= 0x206F) || code_point == 0x061C || code_point == 0xFEFF;
}

std::string escaped(std::string_view text, bool keep_line_breaks) {
    std::string out;
    out.reserve(text.size());
    while (!text.empty()) {
        const std::size_t bytes = utf8_sequence_bytes(text);
        if (bytes == 0) {
            append_byte_escape(out, byte_at(text, 0));
            text.remove_prefix(1);
            continue;
        }
        const std::uint32_t code_point = code_point_of(text, bytes);
        if (keep_line_breaks && code_point == '\n') {
            out += '\n';
        } else if (keep_line_breaks && code_point == '\t') {
            out += ' ';
        } else if (code_point < 0x20 || (code_point >= 0x7F && code_point < 0xA0)) {
            append_byte_escape(out, static_cast<std::uint8_t>(code_point));
        } else if (misleads(code_point)) {
            append_code_point_escape(out, code_point);
        } else {
            out += text.substr(0, bytes);
        }
        text.remove_prefix(bytes);
    }
    return out;
}

}  // namespace

std::size_t utf8_sequence_bytes(std::string_view text) {
    if (text.empty()) return 0;
    const std::uint8_t first = byte_at(text, 0);
    if (first < 0x80) return 1;
    // The second byte's range excludes overlong forms, surrogates and what lies beyond U+10FFFF.
    std::size_t bytes = 0;
    std::uint8_t low = 0x80, high = 0xBF;
    if (first >= 0xC2 && first <= 0xDF) {
        bytes = 2;
    } else if (first >= 0xE0 && first <= 0xEF) {
        bytes = 3;
        if (first == 0xE0) low = 0xA0;
        if (first == 0xED) high = 0x9F;
    } else if (first >= 0xF0 && first <= 0xF4) {
        bytes = 4;
        if (first == 0xF0) low = 0x90;
        if (first == 0xF4) high = 0x8F;
    } else {
        return 0;
    }
    if (text.size() < bytes || byte_at(text, 1) < low || byte_at(text, 1) > high) return 0;
    for (std::size_t i = 2; i < bytes; ++i) {
        if ((byte_at(text, i) & 0xC0) != 0x80) return 0;
    }
    return bytes;
}

std::string printable(std::string_view text) { return escaped(text, false); }

std::string printable_lines(std::string_view text) { return escaped(text, true); }

std::string valid_utf8(std::string_view text) {
    std::string out;
    out.reserve(text.size());
    while (!text.empty()) {
        const std::size_t bytes = utf8_sequence_bytes(text);
        if (bytes == 0) {
            out += "\xEF\xBF\xBD";
            text.remove_prefix(1);
        } else {
            out += text.substr(0, bytes);
            text.remove_prefix(bytes);
        }
    }
    return out;
}

std::size_t columns_of(std::string_view text) {
    std::size_t columns = 0;
    for (const char c : text) columns += (static_cast<std::uint8_t>(c) & 0xC0) != 0x80 ? 1 : 0;
    return columns;
}

std::string_view first_columns(std::string_view text, std::size_t columns) {
    for (std::size_t i = 0; i < text.size(); ++i) {
        if ((byte_at(text, i) & 0xC0) != 0x80 && columns-- == 0) return text.substr(0, i);
    }
    return text;
}

}  // namespace halflsb
