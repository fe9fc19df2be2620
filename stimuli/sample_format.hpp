// What a sample is on the wire and in the firmware: word length, binary point, and what a code is
// worth.
//
//   q formats: value = code / 2^fraction_bits      full scale is 1.0, codes run from -1 to 1 - 1 LSB
//   i formats: value = code                        full scale is 2^(word_bits - 1)
//   f32:       value = the number                  full scale is 1.0, there is no LSB
//
// A code of f32 is the 32 bits of the number; every other code is the signed integer itself.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <string_view>
#include <vector>

#include "stimuli/rounding.hpp"

namespace halflsb {

/// The raw integer in a word. All formats of this version fit 32 bits.
using Code = std::int32_t;

enum class FormatFamily { q, i, f };

struct SampleFormat {
    std::string_view name;  ///< "q15", "q31", "i16", "i32", "f32"
    FormatFamily family = FormatFamily::q;
    int word_bits = 16;
    int fraction_bits = 15;        ///< 0 for i formats, meaningless for f32
    std::uint8_t wire_number = 0;  ///< its number in the greeting, docs/wire.md

    std::size_t word_bytes() const { return static_cast<std::size_t>(word_bits) / 8; }
    bool has_lsb() const { return family != FormatFamily::f; }
    bool operator==(const SampleFormat& other) const { return name == other.name; }
};

const std::vector<SampleFormat>& sample_formats();
std::optional<SampleFormat> sample_format(std::string_view name);
std::optional<SampleFormat> sample_format_of_wire_number(std::uint8_t number);

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

/// Little-endian words of word_bytes(), as they travel. `bytes` holds codes.size() * word_bytes().
void to_wire_bytes(const SampleFormat& format, std::span<const Code> codes, std::span<std::byte> bytes);
void from_wire_bytes(const SampleFormat& format, std::span<const std::byte> bytes, std::span<Code> codes);

}  // namespace halflsb
