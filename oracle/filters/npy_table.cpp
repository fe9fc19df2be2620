#include "oracle/filters/npy_table.hpp"

#include <algorithm>
#include <bit>
#include <charconv>
#include <cmath>
#include <cstring>

#include "stimuli/npy.hpp"

namespace halflsb {

namespace {

constexpr std::int64_t largest_exact = std::int64_t{1} << 53;
constexpr std::string_view anew = "save it anew with numpy.save";

FileProblem refused(std::size_t byte, std::string problem, std::string_view remedy) {
    return {byte, {}, std::move(problem), std::string(remedy)};
}

template <class T>
T element(const std::byte* at) {
    static_assert(std::endian::native == std::endian::little);
    T value{};
    std::memcpy(&value, at, sizeof value);
    return value;
}

/// Nullopt of what no double holds.
std::optional<double> number_at(NpyType type, const std::byte* at) {
    switch (type) {
        case NpyType::int8:
            return element<std::int8_t>(at);
        case NpyType::uint8:
            return element<std::uint8_t>(at);
        case NpyType::uint16:
            return element<std::uint16_t>(at);
        case NpyType::int16:
            return element<std::int16_t>(at);
        case NpyType::int32:
            return element<std::int32_t>(at);
        case NpyType::int64: {
            const auto whole = element<std::int64_t>(at);
            if (whole > largest_exact || whole < -largest_exact) return std::nullopt;
            return static_cast<double>(whole);
        }
        case NpyType::float32:
            return static_cast<double>(element<float>(at));
        case NpyType::float64:
            break;
    }
    return element<double>(at);
}

/// "byte N" of an Error of parse_npy_header.
std::size_t byte_of(const std::string& place) {
    std::size_t byte = 0;
    const std::size_t digits = std::min(place.find_first_of("0123456789"), place.size());
    std::from_chars(place.data() + digits, place.data() + place.size(), byte);
    return byte;
}

/// What a header says in quotation marks may be anything.
std::string harmless(std::string text) {
    for (char& c : text) c = c >= ' ' && c <= '~' ? c : '?';
    if (text.size() > 300) text.replace(300, std::string::npos, "...");
    return text;
}

}  // namespace

ReadTable read_npy_table(std::span<const std::byte> file) {
    const auto header = parse_npy_header(file);
    if (!header) {
        const Error& error = header.error();
        return refused(byte_of(error.place), harmless(error.problem),
                       error.remedy.empty() ? std::string(anew) : error.remedy);
    }
    const auto rows = static_cast<std::size_t>(header->count), width = static_cast<std::size_t>(header->channels);
    const std::size_t size = bytes_of(header->type), there = file.size() - header->data_offset;
    if (rows == 0 || width == 0) return refused(header->data_offset, "the array is empty", "save it with its numbers");
    // By division: a header may claim any count.
    if (there / size / width < rows || there != rows * width * size) {
        return refused(file.size(),
                       "the file holds " + std::to_string(there) + " bytes of numbers, its header says " +
                           std::to_string(rows) + " x " + std::to_string(width) + " of " + std::to_string(size) +
                           " bytes",
                       "it was cut, or changed after it was saved: save it anew");
    }
    if (rows > most_file_numbers / width) {
        return refused(header->data_offset, "there are more than " + std::to_string(most_file_numbers) + " numbers",
                       "save the coefficients alone");
    }
    CoefficientTable table;
    table.row_numbers = width == 1 ? 0 : width;
    table.is_integer_type = header->type != NpyType::float32 && header->type != NpyType::float64;
    table.type_name = descriptor_of(header->type);
    for (std::size_t i = 0; i < rows * width; ++i) {
        const std::size_t byte = header->data_offset + i * size;
        const auto number = number_at(header->type, file.data() + byte);
        if (!number || !std::isfinite(*number)) {
            return refused(byte,
                           std::string("number ") + std::to_string(i + 1) + " is " +
                               (number ? "not finite" : "beyond the 53 bits that a reference in double can hold"),
                           "save finite numbers of at most 53 bits");
        }
        table.numbers.push_back(*number);
        table.places.push_back(byte);
    }
    return table;
}

}  // namespace halflsb
