// The header of a NumPy array file, as bytes. One-dimensional arrays only; no I/O.
//
// NPY format (NumPy documentation, numpy.lib.format): the magic string \x93NUMPY, version, length of
// the dictionary, the dictionary as a Python literal padded with blanks to a newline, then the numbers.
#pragma once

#include <array>
#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <string_view>

#include "stimuli/outcome.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

/// What an element is; all little-endian.
enum class NpyType {
    int8,     ///< '|i1'
    uint8,    ///< '|u1'
    uint16,   ///< '<u2'
    int16,    ///< '<i2'
    int32,    ///< '<i4'
    int64,    ///< '<i8', only read
    float32,  ///< '<f4'
    float64,  ///< '<f8'
};

std::size_t bytes_of(NpyType type);
/// The descriptor without quotes: "<i2".
std::string_view descriptor_of(NpyType type);
/// The narrowest type that holds every code of a format: i24 is int32, u12 is uint16, f32 is float32.
NpyType npy_type_of(const SampleFormat& format);
/// Codes as the data of a file of that type; whatever the format's layout on the wire is.
void to_npy_bytes(const SampleFormat& format, std::span<const Code> codes, std::span<std::byte> bytes);
void from_npy_bytes(const SampleFormat& format, std::span<const std::byte> bytes, std::span<Code> codes);

/// The size of every header we write, whatever the count: a file can be begun before its length is
/// known and the header written again over the old one.
inline constexpr std::size_t npy_header_bytes = 128;
using NpyHeaderBytes = std::array<std::byte, npy_header_bytes>;

/// A header of version 1.0 for `count` rows of `channels` elements, shape (count,) for one channel, else
/// (count, channels); `count` must not be negative.
NpyHeaderBytes npy_header(NpyType type, std::int64_t count, int channels = 1);

struct NpyHeader {
    NpyType type = NpyType::int16;
    std::int64_t count = 0;       ///< rows
    std::int64_t channels = 1;    ///< elements of a row
    std::size_t data_offset = 0;  ///< bytes before the first element
};

/// The most bytes parse_npy_header can need; longer dictionaries are refused.
inline constexpr std::size_t npy_longest_header_bytes = 65'536;

/// Reads the header at the front of `file`, which may end anywhere behind it. Takes versions 1.0 and
/// 2.0, the dictionary's keys in any order. Refuses, as an input Error at place "byte N": another
/// magic or version, truncation, a broken dictionary, other types, shapes of more than two dimensions,
/// several channels in fortran_order (in one dimension it means nothing).
Outcome<NpyHeader> parse_npy_header(std::span<const std::byte> file);

}  // namespace halflsb
