// What a sample is on the wire and in the firmware: word length, binary point, and what a code is
// worth.
//
//   q formats: value = code / 2^fraction_bits      full scale is 1.0, codes run from -1 to 1 - 1 LSB
//   i formats: value = code                        full scale is 2^(word_bits - 1)
//   u formats: value = code - 2^(word_bits - 1)    offset binary: the mid-code is zero, full scale as for i
//   f32:       value = the number                  full scale is 1.0, there is no LSB
//
// A code of f32 is the 32 bits of the number; every other code is the integer itself, 0 .. 2^word_bits - 1
// for u formats. How a code lies in bytes (justification, byte order) changes neither code nor value.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

#include "stimuli/outcome.hpp"
#include "stimuli/rounding.hpp"

namespace halflsb {

/// The raw integer in a word. All formats of this version fit 32 bits.
using Code = std::int32_t;

enum class FormatFamily { q, i, f, u };

/// Where the bits of a code lie in a container that is wider (u12 in 2 bytes, i24 in 4).
enum class Justification {
    right,   ///< the number itself, sign-extended
    left,    ///< moved up to the top, zeros below
    packed,  ///< no spare bits: 3 bytes for i24
};
enum class ByteOrder { little, big };

struct SampleFormat {
    std::string_view name;  ///< "q15", "i24", "u12", "f32" ...; the table is in the .cpp
    FormatFamily family = FormatFamily::q;
    int word_bits = 16;
    int fraction_bits = 15;        ///< 0 for i formats, meaningless for f32
    std::uint8_t wire_number = 0;  ///< its number in the greeting, docs/wire.md
    Justification justification = Justification::right;
    ByteOrder byte_order = ByteOrder::little;

    /// Of the container: 1, 2 or 4; 3 for a packed i24.
    std::size_t word_bytes() const;
    bool has_lsb() const { return family != FormatFamily::f; }
    bool operator==(const SampleFormat& other) const {
        return name == other.name && justification == other.justification && byte_order == other.byte_order;
    }
};

/// In what a value is counted: a q format in full scales, i and u formats in LSB, a float in whatever the
/// firmware chose.
enum class ValueKind { fraction, codes, number };
ValueKind value_kind(const SampleFormat& format);

const std::vector<SampleFormat>& sample_formats();
std::optional<SampleFormat> sample_format(std::string_view name);
/// "u12, left-justified, big-endian"; the defaults are not said.
std::string text_of(const SampleFormat& format);
/// The format in another layout; an Error's place is "justification". Left needs spare bits in the container,
/// packed a word of whole bytes that is narrower than it. One byte has no order: it stays little-endian.
Outcome<SampleFormat> with_layout(SampleFormat format, Justification justification, ByteOrder byte_order);
/// The byte of the greeting: wire_number, justification << 5, byte order << 7 (docs/wire.md).
std::uint8_t wire_code_of(const SampleFormat& format);
std::optional<SampleFormat> sample_format_of_wire_code(std::uint8_t code);

/// The code of value 0: the mid-code of u formats, else 0.
Code zero_code(const SampleFormat& format);

/// What one code step is worth: 2^-fraction_bits; 1 for i formats. Needs has_lsb().
double lsb_value(const SampleFormat& format);
/// 2^(word_bits - 1) codes as a value; 1.0 for f32.
double full_scale_value(const SampleFormat& format);
/// The ends of the range, as values: -full scale, and full scale - 1 LSB. For f32 the largest finite
/// float of either sign.
double lowest_value(const SampleFormat& format);
double highest_value(const SampleFormat& format);

double value_of(const SampleFormat& format, Code code);
/// The nearest code in the named rounding; saturates at the ends. `value` must not be NaN.
/// f32 rounds to the nearest float, ties to even, whatever the rounding.
Code code_of(const SampleFormat& format, double value, Rounding rounding);

void values_of(const SampleFormat& format, std::span<const Code> codes, std::span<double> values);

/// Words of word_bytes() in the format's layout, as they travel. `bytes` holds codes.size() * word_bytes().
/// Reading drops nothing that a right-justified container holds: a u12 word of 0x1fff is the code 8191, which no
/// u12 is, and shows as an error. Of a left-justified one it drops the spare bits below.
void to_wire_bytes(const SampleFormat& format, std::span<const Code> codes, std::span<std::byte> bytes);
void from_wire_bytes(const SampleFormat& format, std::span<const std::byte> bytes, std::span<Code> codes);

}  // namespace halflsb
