#include "stimuli/sample_format.hpp"

#include <algorithm>
#include <bit>
#include <cassert>
#include <limits>

namespace halflsb {

namespace {

constexpr double largest_float = static_cast<double>(std::numeric_limits<float>::max());

/// 2^exponent, exact; exponent 0 .. 62.
double power_of_two(int exponent) { return static_cast<double>(std::int64_t{1} << exponent); }

double codes_in_full_scale(const SampleFormat& format) { return power_of_two(format.word_bits - 1); }

int container_bits_of(const SampleFormat& format) { return 8 * static_cast<int>(format.word_bytes()); }

/// How far up the code lies in its container.
int spare_bits_below(const SampleFormat& format) {
    return format.justification == Justification::left ? container_bits_of(format) - format.word_bits : 0;
}

/// Which byte of the word, counted from its lowest, travels as number `k`.
std::size_t significance(const SampleFormat& format, std::size_t k) {
    return format.byte_order == ByteOrder::big ? format.word_bytes() - 1 - k : k;
}

}  // namespace

const std::vector<SampleFormat>& sample_formats() {
    static const std::vector<SampleFormat> formats = {
        {"q15", FormatFamily::q, 16, 15, 1}, {"q31", FormatFamily::q, 32, 31, 2}, {"i16", FormatFamily::i, 16, 0, 3},
        {"i32", FormatFamily::i, 32, 0, 4},  {"f32", FormatFamily::f, 32, 0, 5},  {"q7", FormatFamily::q, 8, 7, 6},
        {"i8", FormatFamily::i, 8, 0, 7},    {"i24", FormatFamily::i, 24, 0, 8},  {"u8", FormatFamily::u, 8, 0, 9},
        {"u12", FormatFamily::u, 12, 0, 10}, {"u16", FormatFamily::u, 16, 0, 11},
    };
    return formats;
}

ValueKind value_kind(const SampleFormat& format) {
    switch (format.family) {
        case FormatFamily::q:
            return ValueKind::fraction;
        case FormatFamily::i:
        case FormatFamily::u:
            return ValueKind::codes;
        case FormatFamily::f:
            break;
    }
    return ValueKind::number;
}

std::optional<SampleFormat> sample_format(std::string_view name) {
    for (const SampleFormat& format : sample_formats()) {
        if (format.name == name) return format;
    }
    return std::nullopt;
}

std::size_t SampleFormat::word_bytes() const {
    const auto bytes = static_cast<std::size_t>(word_bits + 7) / 8;
    return bytes == 3 && justification != Justification::packed ? 4 : bytes;
}

std::string text_of(const SampleFormat& format) {
    std::string text(format.name);
    if (format.justification == Justification::left) text += ", left-justified";
    if (format.justification == Justification::packed) text += ", packed";
    if (format.byte_order == ByteOrder::big) text += ", big-endian";
    return text;
}

Outcome<SampleFormat> with_layout(SampleFormat format, Justification justification, ByteOrder byte_order) {
    format.justification = justification;
    // One byte has no order; so that each layout has one spelling, it is called little-endian.
    format.byte_order = format.word_bytes() == 1 ? ByteOrder::little : byte_order;
    const int container_bits = container_bits_of(format);
    const auto refuse = [&](std::string problem, std::string remedy) {
        return Error{ErrorKind::input, "justification", std::move(problem), std::move(remedy)};
    };
    if (justification == Justification::left && container_bits == format.word_bits) {
        return refuse(std::string(format.name) + " has no room to the left: it fills its " +
                          std::to_string(format.word_bytes()) + (format.word_bytes() == 1 ? " byte" : " bytes"),
                      "leave it out; only u12 and i24 have spare bits");
    }
    if (justification == Justification::packed && format.word_bytes() != 3) {
        return refuse(std::string(format.name) + " cannot be packed", "leave it out; only i24 has a byte to save");
    }
    return format;
}

std::uint8_t wire_code_of(const SampleFormat& format) {
    return static_cast<std::uint8_t>(format.wire_number | static_cast<unsigned>(format.justification) << 5 |
                                     static_cast<unsigned>(format.byte_order) << 7);
}

std::optional<SampleFormat> sample_format_of_wire_code(std::uint8_t code) {
    const unsigned justification = code >> 5 & 3U;
    if (justification > 2U) return std::nullopt;
    for (const SampleFormat& format : sample_formats()) {
        if (format.wire_number != (code & 0x1fU)) continue;
        auto laid_out =
            with_layout(format, static_cast<Justification>(justification), static_cast<ByteOrder>(code >> 7));
        if (laid_out) return *laid_out;
    }
    return std::nullopt;
}

Code zero_code(const SampleFormat& format) {
    return format.family == FormatFamily::u ? Code{1} << (format.word_bits - 1) : 0;
}

double lsb_value(const SampleFormat& format) {
    assert(format.has_lsb());
    return 1.0 / power_of_two(format.fraction_bits);
}

double full_scale_value(const SampleFormat& format) {
    if (!format.has_lsb()) return 1.0;
    return codes_in_full_scale(format) * lsb_value(format);
}

double lowest_value(const SampleFormat& format) {
    return format.has_lsb() ? -full_scale_value(format) : -largest_float;
}

double highest_value(const SampleFormat& format) {
    return format.has_lsb() ? full_scale_value(format) - lsb_value(format) : largest_float;
}

double value_of(const SampleFormat& format, Code code) {
    if (!format.has_lsb()) return static_cast<double>(std::bit_cast<float>(code));
    // In doubles: the difference of two codes may not fit a code.
    return (static_cast<double>(code) - static_cast<double>(zero_code(format))) * lsb_value(format);
}

Code code_of(const SampleFormat& format, double value, Rounding rounding) {
    if (!format.has_lsb()) {
        // Clamped first: converting a double beyond the largest float is undefined.
        return std::bit_cast<Code>(static_cast<float>(std::clamp(value, -largest_float, largest_float)));
    }
    const double end = codes_in_full_scale(format);
    const double codes = value * power_of_two(format.fraction_bits);
    // Also clamped before rounding, so that round_to_whole sees nothing beyond 2^52.
    const double whole = round_to_whole(std::clamp(codes, -end - 1.0, end), rounding);
    return static_cast<Code>(std::clamp(whole, -end, end - 1.0) + static_cast<double>(zero_code(format)));
}

void values_of(const SampleFormat& format, std::span<const Code> codes, std::span<double> values) {
    assert(codes.size() == values.size());
    if (format.has_lsb()) {
        const double step = lsb_value(format);
        const auto zero = static_cast<double>(zero_code(format));
        for (std::size_t i = 0; i < codes.size(); ++i) values[i] = (static_cast<double>(codes[i]) - zero) * step;
    } else {
        for (std::size_t i = 0; i < codes.size(); ++i) values[i] = static_cast<double>(std::bit_cast<float>(codes[i]));
    }
}

void to_wire_bytes(const SampleFormat& format, std::span<const Code> codes, std::span<std::byte> bytes) {
    const std::size_t word_bytes = format.word_bytes();
    assert(bytes.size() == codes.size() * word_bytes);
    const int spare_bits = spare_bits_below(format);
    std::size_t at = 0;
    for (const Code code : codes) {
        const std::uint32_t word = static_cast<std::uint32_t>(code) << spare_bits;
        for (std::size_t k = 0; k < word_bytes; ++k) {
            bytes[at++] = static_cast<std::byte>(word >> (8 * significance(format, k)) & 0xffU);
        }
    }
}

void from_wire_bytes(const SampleFormat& format, std::span<const std::byte> bytes, std::span<Code> codes) {
    const std::size_t word_bytes = format.word_bytes();
    assert(bytes.size() == codes.size() * word_bytes);
    const int above_bits = 32 - container_bits_of(format);
    const int spare_bits = spare_bits_below(format);
    const bool is_unsigned = format.family == FormatFamily::u;
    std::size_t at = 0;
    for (Code& code : codes) {
        std::uint32_t word = 0;
        for (std::size_t k = 0; k < word_bytes; ++k) {
            word |= std::to_integer<std::uint32_t>(bytes[at++]) << (8 * significance(format, k));
        }
        // Up to the top of 32 bits and back, so that the sign of the container is extended.
        word <<= above_bits;
        const int back = above_bits + spare_bits;
        code = is_unsigned ? static_cast<Code>(word >> back) : static_cast<Code>(word) >> back;
    }
}

}  // namespace halflsb
