#include "stimuli/npy.hpp"

#include <algorithm>
#include <cassert>
#include <charconv>
#include <string>

namespace halflsb {

namespace {

constexpr std::string_view magic = "\x93NUMPY";
constexpr std::size_t version_bytes = 2;
constexpr std::array<std::string_view, 8> descriptors = {"|i1", "|u1", "<u2", "<i2", "<i4", "<i8", "<f4", "<f8"};

Error broken(std::size_t at, std::string problem, std::string remedy = "") {
    return {ErrorKind::input, "byte " + std::to_string(at), std::move(problem), std::move(remedy)};
}

/// Reads the dictionary of a header: a Python literal of known form.
class DictionaryReader {
public:
    DictionaryReader(std::string_view text, std::size_t offset) : text_(text), offset_(offset) {}

    Outcome<NpyHeader> read() {
        if (!take('{')) return expected("'{'");
        while (!take('}')) {
            auto key = quoted("a key in quotes");
            if (!key) return key.error();
            if (!take(':')) return expected("':'");
            if (auto read_value = value_of_key(*key); !read_value) return read_value.error();
            if (take(',')) continue;
            if (take('}')) break;
            return expected("',' or '}'");
        }
        skip_blanks();
        if (at_ != text_.size()) return expected("only blanks up to the newline");
        if (!type_) return broken(offset_, "the dictionary has no 'descr'");
        if (!order_seen_) return broken(offset_, "the dictionary has no 'fortran_order'");
        if (!count_) return broken(offset_, "the dictionary has no 'shape'");
        if (is_fortran_ && channels_ != 1) {
            return broken(offset_, "several channels in Fortran order",
                          "save the array in C order, (samples, channels)");
        }
        return NpyHeader{*type_, *count_, channels_, 0};
    }

private:
    Outcome<void> value_of_key(std::string_view key) {
        const std::size_t place = offset_ + at_;
        if (key == "descr") return type_ ? repeated(key, place) : read_type();
        if (key == "fortran_order") return order_seen_ ? repeated(key, place) : read_order();
        if (key == "shape") return count_ ? repeated(key, place) : read_shape();
        return broken(place, "the dictionary has an unknown key '" + std::string(key) + "'");
    }

    static Outcome<void> repeated(std::string_view key, std::size_t place) {
        return broken(place, "the dictionary has '" + std::string(key) + "' twice");
    }

    Outcome<void> read_type() {
        skip_blanks();
        const std::size_t place = offset_ + at_;
        if (at_ < text_.size() && text_[at_] == '[') {
            return broken(place, "elements are records", "save each column as an array of its own");
        }
        auto text = quoted("a type in quotes");
        if (!text) return text.error();
        const auto found = std::find(descriptors.begin(), descriptors.end(), *text);
        if (found == descriptors.end()) {
            return broken(place, "elements of type '" + std::string(*text) + "' are not taken",
                          "save as one of |i1, |u1, <u2, <i2, <i4, <i8, <f4, <f8");
        }
        type_ = static_cast<NpyType>(found - descriptors.begin());
        return {};
    }

    Outcome<void> read_order() {
        is_fortran_ = word("True");
        if (!is_fortran_ && !word("False")) return expected("True or False");
        order_seen_ = true;
        return {};
    }

    Outcome<void> read_shape() {
        skip_blanks();
        const std::size_t place = offset_ + at_;
        if (!take('(')) return expected("'('");
        std::size_t dimensions = 0;
        std::int64_t lengths[2] = {0, 1};
        bool comma = true;
        while (!take(')')) {
            if (!comma) return expected("',' or ')'");
            skip_blanks();
            const char* begin = text_.data() + at_;
            std::int64_t length = 0;
            const auto [end, error] = std::from_chars(begin, text_.data() + text_.size(), length);
            if (error != std::errc() || length < 0) return expected("a length");
            at_ += static_cast<std::size_t>(end - begin);
            if (dimensions < 2) lengths[dimensions] = length;
            ++dimensions;
            comma = take(',');
        }
        if (dimensions == 1 && !comma) return expected("',' after the only length");
        if (dimensions != 1 && dimensions != 2) {
            return broken(place, "the array has " + std::to_string(dimensions) + " dimensions",
                          "save one channel as a one-dimensional array, several as (samples, channels)");
        }
        count_ = lengths[0];
        channels_ = lengths[1];
        return {};
    }

    void skip_blanks() {
        while (at_ < text_.size() && (text_[at_] == ' ' || text_[at_] == '\n')) ++at_;
    }

    bool take(char wanted) {
        skip_blanks();
        if (at_ >= text_.size() || text_[at_] != wanted) return false;
        ++at_;
        return true;
    }

    bool word(std::string_view wanted) {
        skip_blanks();
        if (text_.substr(at_, wanted.size()) != wanted) return false;
        at_ += wanted.size();
        return true;
    }

    Outcome<std::string_view> quoted(std::string_view what) {
        skip_blanks();
        if (at_ >= text_.size() || (text_[at_] != '\'' && text_[at_] != '"')) return expected(what);
        const std::size_t end = text_.find(text_[at_], at_ + 1);
        if (end == std::string_view::npos) return expected("a closing quote");
        const auto inside = text_.substr(at_ + 1, end - at_ - 1);
        at_ = end + 1;
        return inside;
    }

    Error expected(std::string_view what) const {
        return broken(offset_ + at_, "the dictionary needs " + std::string(what) + " here");
    }

    std::string_view text_;
    std::size_t offset_;
    std::size_t at_ = 0;
    std::optional<NpyType> type_;
    std::optional<std::int64_t> count_;
    std::int64_t channels_ = 1;
    bool order_seen_ = false, is_fortran_ = false;
};

}  // namespace

std::size_t bytes_of(NpyType type) {
    constexpr std::array<std::size_t, 8> sizes = {1, 1, 2, 2, 4, 8, 4, 8};
    return sizes[static_cast<std::size_t>(type)];
}

std::string_view descriptor_of(NpyType type) { return descriptors[static_cast<std::size_t>(type)]; }

NpyType npy_type_of(const SampleFormat& format) {
    if (!format.has_lsb()) return NpyType::float32;
    const bool is_unsigned = format.family == FormatFamily::u;
    if (format.word_bits <= 8) return is_unsigned ? NpyType::uint8 : NpyType::int8;
    if (format.word_bits <= 16) return is_unsigned ? NpyType::uint16 : NpyType::int16;
    return NpyType::int32;
}

void to_npy_bytes(const SampleFormat& format, std::span<const Code> codes, std::span<std::byte> bytes) {
    const std::size_t size = bytes_of(npy_type_of(format));
    assert(bytes.size() == codes.size() * size);
    std::size_t at = 0;
    for (const Code code : codes) {
        const auto word = static_cast<std::uint32_t>(code);
        for (std::size_t k = 0; k < size; ++k) bytes[at++] = static_cast<std::byte>(word >> (8 * k) & 0xffU);
    }
}

void from_npy_bytes(const SampleFormat& format, std::span<const std::byte> bytes, std::span<Code> codes) {
    const std::size_t size = bytes_of(npy_type_of(format));
    assert(bytes.size() == codes.size() * size);
    const auto unused_bits = static_cast<int>(32 - 8 * size);
    const bool is_unsigned = format.family == FormatFamily::u;
    std::size_t at = 0;
    for (Code& code : codes) {
        std::uint32_t word = 0;
        for (std::size_t k = 0; k < size; ++k) word |= std::to_integer<std::uint32_t>(bytes[at++]) << (8 * k);
        code = is_unsigned ? static_cast<Code>(word) : static_cast<Code>(word << unused_bits) >> unused_bits;
    }
}

NpyHeaderBytes npy_header(NpyType type, std::int64_t count, int channels) {
    assert(count >= 0);
    constexpr std::size_t prefix_bytes = magic.size() + version_bytes + 2;
    constexpr std::size_t dictionary_bytes = npy_header_bytes - prefix_bytes;
    std::string text(magic);
    text += std::string_view("\x01\x00", version_bytes);
    text += static_cast<char>(dictionary_bytes & 0xff);
    text += static_cast<char>(dictionary_bytes >> 8);
    // As NumPy writes it: keys in alphabetical order, a comma behind the last.
    text += "{'descr': '" + std::string(descriptor_of(type)) + "', 'fortran_order': False, 'shape': (" +
            std::to_string(count) + (channels == 1 ? ",), }" : ", " + std::to_string(channels) + "), }");
    text.resize(npy_header_bytes - 1, ' ');
    text += '\n';
    NpyHeaderBytes bytes{};
    std::transform(text.begin(), text.end(), bytes.begin(), [](char c) { return static_cast<std::byte>(c); });
    return bytes;
}

Outcome<NpyHeader> parse_npy_header(std::span<const std::byte> file) {
    const auto truncated = [&](std::size_t needed) {
        return broken(file.size(), "the file ends inside its NPY header of " + std::to_string(needed) + " bytes",
                      "it is cut off; write it again");
    };
    const auto byte_at = [&](std::size_t at) { return std::to_integer<std::size_t>(file[at]); };
    for (std::size_t i = 0; i < std::min(magic.size(), file.size()); ++i) {
        if (file[i] != static_cast<std::byte>(magic[i])) {
            return broken(i, "this is no NPY file", "save the array with NumPy's save()");
        }
    }
    constexpr std::size_t shortest_prefix = magic.size() + version_bytes + 2;
    if (file.size() < shortest_prefix) return truncated(shortest_prefix);
    const std::size_t major = byte_at(6);
    const std::size_t minor = byte_at(7);
    if ((major != 1 && major != 2) || minor != 0) {
        return broken(6, "NPY version " + std::to_string(major) + "." + std::to_string(minor) + " is not taken",
                      "save as version 1.0 or 2.0");
    }
    const std::size_t length_bytes = major == 1 ? 2 : 4;
    const std::size_t offset = magic.size() + version_bytes + length_bytes;
    if (file.size() < offset) return truncated(offset);
    std::size_t length = 0;
    for (std::size_t k = length_bytes; k-- > 0;) length = length << 8 | byte_at(8 + k);
    if (offset + length > npy_longest_header_bytes) {
        return broken(8, "a dictionary of " + std::to_string(length) + " bytes is too long",
                      "ours need 118 bytes; the file is damaged, or no plain array");
    }
    if (file.size() < offset + length) return truncated(offset + length);
    std::string text(length, ' ');
    std::transform(file.begin() + static_cast<std::ptrdiff_t>(offset),
                   file.begin() + static_cast<std::ptrdiff_t>(offset + length), text.begin(),
                   [](std::byte b) { return static_cast<char>(b); });
    auto header = DictionaryReader(text, offset).read();
    if (header) header->data_offset = offset + length;
    return header;
}

}  // namespace halflsb
