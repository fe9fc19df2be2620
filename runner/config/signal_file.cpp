#include "runner/config/signal_file.hpp"

#include <bit>
#include <cmath>
#include <cstdint>
#include <cstring>
#include <span>

#include "runner/config/csv_signal.hpp"
#include "runner/config/source_text.hpp"
#include "stimuli/npy.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::string_view npy_magic = "\x93NUMPY";
/// Up to here a double holds every whole number.
constexpr std::int64_t largest_exact = std::int64_t{1} << 53;

template <class T>
T element(const std::byte* at) {
    T value{};
    std::memcpy(&value, at, sizeof value);
    return value;
}

double number_at(NpyType type, const std::byte* at) {
    static_assert(std::endian::native == std::endian::little);
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
        case NpyType::int64:
            return static_cast<double>(element<std::int64_t>(at));
        case NpyType::float32:
            return static_cast<double>(element<float>(at));
        case NpyType::float64:
            break;
    }
    return element<double>(at);
}

bool is_float(NpyType type) { return type == NpyType::float32 || type == NpyType::float64; }

/// What no double can stand for, or "".
std::string problem_of(NpyType type, const std::byte* at, double number) {
    if (!std::isfinite(number)) {
        return std::string(std::isnan(number) ? "nan" : number > 0.0 ? "inf" : "-inf") + " is no finite number";
    }
    if (type == NpyType::int64) {
        const auto whole = element<std::int64_t>(at);
        if (whole > largest_exact || whole < -largest_exact) return std::to_string(whole) + " is no sample's number";
    }
    return {};
}

std::variant<SignalFile, std::string> read_npy(const SignalFileName& name, std::span<const std::byte> bytes) {
    const auto refused = [&](std::size_t byte, const std::string& problem, std::string_view remedy) {
        return render_without_line(name.shown, "byte " + std::to_string(byte) + ": " + problem, remedy);
    };
    const auto header = parse_npy_header(bytes);
    if (!header) {
        const Error& error = header.error();
        return render_without_line(name.shown, error.place + ": " + error.problem,
                                   error.remedy.empty() ? "save it anew with numpy.save" : error.remedy);
    }
    const auto rows = static_cast<std::size_t>(header->count), width = static_cast<std::size_t>(header->channels);
    if (rows == 0 || width == 0) {
        return refused(header->data_offset, "the array is empty", "save an array of at least one sample");
    }
    if (width > most_signal_columns) {
        return refused(header->data_offset,
                       std::to_string(width) + " columns, the most are " + std::to_string(most_signal_columns),
                       "save it as (samples, channels)");
    }
    const std::size_t size = bytes_of(header->type), there = bytes.size() - header->data_offset;
    // By division: a header may claim any count.
    if (there / size / width < rows || there != rows * width * size) {
        return refused(bytes.size(),
                       "the file holds " + std::to_string(there) + " bytes of data, its header says " +
                           std::to_string(rows) + " x " + std::to_string(width) + " elements of " +
                           std::to_string(size) + " bytes",
                       "it was cut, or changed after it was saved: save it anew");
    }
    SignalFile file;
    file.path = name.as_written;
    file.whole_numbers = !is_float(header->type);
    for (std::size_t c = 0; c < width; ++c) file.names.push_back(width == 1 ? std::string() : std::to_string(c + 1));
    file.columns.assign(width, std::vector<double>(rows));
    const std::byte* at = bytes.data() + header->data_offset;
    for (std::size_t i = 0; i < rows; ++i) {
        for (std::size_t c = 0; c < width; ++c, at += size) {
            const double number = number_at(header->type, at);
            if (const std::string problem = problem_of(header->type, at, number); !problem.empty()) {
                return refused(static_cast<std::size_t>(at - bytes.data()),
                               problem + ", sample " + std::to_string(i) +
                                   (width == 1 ? "" : " of column " + std::to_string(c + 1)),
                               "save finite numbers only");
            }
            file.columns[c][i] = number;
        }
    }
    return file;
}

}  // namespace

std::variant<SignalFile, std::string> read_signal_file(const SignalFileName& name, std::string bytes) {
    const bool is_npy = bytes.starts_with(npy_magic) || name.as_written.ends_with(".npy");
    if (is_npy) return read_npy(name, std::as_bytes(std::span(bytes)));
    return read_csv_signal(name, SourceText(name.shown, std::move(bytes)));
}

}  // namespace halflsb
