#include "rigs/virtual-board/sample_words.hpp"

#include <algorithm>
#include <array>

#include "rigs/kit/halflsb_kit.h"

namespace halflsb::board {

namespace {

struct Number {
    std::size_t bytes;
    int bits;
    bool is_offset;
};

Number number_of(Format format) {
    switch (format & 0x1F) {
        case HALFLSB_Q15:
        case HALFLSB_I16:
            return {2, 16, false};
        case HALFLSB_Q7:
        case HALFLSB_I8:
            return {1, 8, false};
        case HALFLSB_U8:
            return {1, 8, true};
        case HALFLSB_U12:
            return {2, 12, true};
        case HALFLSB_U16:
            return {2, 16, true};
        case HALFLSB_I24:
            return {(format & HALFLSB_PACKED) != 0 ? std::size_t{3} : std::size_t{4}, 24, false};
        default:
            return {4, 32, false};
    }
}

bool is_left(Format format) { return (format & HALFLSB_LEFT) != 0; }

int spare_bits(Format format) {
    const Number number = number_of(format);
    return static_cast<int>(8 * number.bytes) - number.bits;
}

/// The word's bytes in memory, the least significant at place 0: this machine is little-endian, and so are packed
/// words.
std::size_t place_of(std::size_t byte, const Number& number, Format format) {
    return (format & HALFLSB_BIG) != 0 ? number.bytes - 1 - byte : byte;
}

}  // namespace

static_assert(__BYTE_ORDER__ == __ORDER_LITTLE_ENDIAN__, "the virtual board runs on little-endian machines");

std::string text_of(Format format) {
    constexpr std::array<const char*, 12> names = {"?",  "q15", "q31", "i16", "i32", "f32",
                                                   "q7", "i8",  "i24", "u8",  "u12", "u16"};
    const std::size_t number = format & 0x1Fu;
    std::string text = names[number < names.size() ? number : 0];
    if (is_left(format)) text += ", left-justified";
    if ((format & HALFLSB_PACKED) != 0) text += ", packed";
    if ((format & HALFLSB_BIG) != 0) text += ", big-endian";
    return text;
}

std::size_t word_bytes(Format format) { return number_of(format).bytes; }
int value_bits(Format format) { return number_of(format).bits; }
bool is_float(Format format) { return (format & 0x1F) == HALFLSB_F32; }
bool has_spare_bits(Format format) { return spare_bits(format) > 0; }
Format other_justification(Format format) { return static_cast<Format>(format ^ HALFLSB_LEFT); }

std::int32_t zero_code(Format format) {
    const Number number = number_of(format);
    return number.is_offset ? std::int32_t{1} << (number.bits - 1) : 0;
}

std::int32_t code_at(const void* words, std::size_t i, Format format) {
    const Number number = number_of(format);
    const auto* word = static_cast<const std::uint8_t*>(words) + i * number.bytes;
    std::uint32_t bits = 0;
    for (std::size_t byte = 0; byte < number.bytes; ++byte) {
        bits |= std::uint32_t{word[place_of(byte, number, format)]} << (8 * byte);
    }
    const int unused = 32 - static_cast<int>(8 * number.bytes);
    const int down = is_left(format) ? spare_bits(format) : 0;
    if (number.is_offset) return static_cast<std::int32_t>(bits >> down);
    return static_cast<std::int32_t>(bits << unused) >> (unused + down);
}

void put_code(void* words, std::size_t i, Format format, std::int32_t code) {
    const Number number = number_of(format);
    auto* word = static_cast<std::uint8_t*>(words) + i * number.bytes;
    const std::uint32_t bits = static_cast<std::uint32_t>(code) << (is_left(format) ? spare_bits(format) : 0);
    for (std::size_t byte = 0; byte < number.bytes; ++byte) {
        word[place_of(byte, number, format)] = static_cast<std::uint8_t>(bits >> (8 * byte) & 0xFFu);
    }
}

std::int32_t bytes_swapped(Format format, std::int32_t code) {
    std::array<std::uint8_t, 4> word{};
    put_code(word.data(), 0, format, code);
    std::reverse(word.begin(), word.begin() + static_cast<std::ptrdiff_t>(word_bytes(format)));
    return code_at(word.data(), 0, format);
}

std::int32_t inverted(Format format, std::int32_t code) {
    if (is_float(format)) return static_cast<std::int32_t>(static_cast<std::uint32_t>(code) ^ 0x80000000u);
    const std::int64_t zero = zero_code(format);
    const std::int64_t highest = (std::int64_t{1} << (value_bits(format) - 1)) - 1;
    return static_cast<std::int32_t>(std::min(zero - code, highest) + zero);
}

}  // namespace halflsb::board
