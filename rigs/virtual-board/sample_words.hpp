// The words of a sample format of the kit (its number and layout, halflsb_kit.h) as the filters of this machine find
// them in memory: what a code is there, its ends, its middle. Faults work on codes and need no format of their own.
#pragma once

#include <cstddef>
#include <cstdint>
#include <string>

namespace halflsb::board {

/// A format byte of the kit: a number and a layout.
using Format = std::uint8_t;

/// "u12, left-justified"; right-justified and little-endian are not said.
std::string text_of(Format format);
std::size_t word_bytes(Format format);
/// Of the number itself: 12 for u12, 24 for i24, wherever they lie. 32 for f32.
int value_bits(Format format);
bool is_float(Format format);
/// The code of zero: the mid-code of u formats, else 0.
std::int32_t zero_code(Format format);
/// Whether the word has bits that the number does not need, so that it can be justified wrongly.
bool has_spare_bits(Format format);
/// The same number at the other end of its word.
Format other_justification(Format format);

/// A code is the number in the word: of u formats from 0, else signed; of f32 the bits. A right-justified word is taken
/// whole, with what its spare bits hold.
std::int32_t code_at(const void* words, std::size_t i, Format format);
void put_code(void* words, std::size_t i, Format format, std::int32_t code);

/// The code whose word has the bytes of this one in the opposite order.
std::int32_t bytes_swapped(Format format, std::int32_t code);
/// The code of the opposite value; of the lowest it is the highest.
std::int32_t inverted(Format format, std::int32_t code);

}  // namespace halflsb::board
