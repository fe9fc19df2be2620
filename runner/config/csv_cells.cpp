#include "runner/config/csv_cells.hpp"

#include <algorithm>
#include <charconv>

namespace halflsb {

void split_cells(std::string_view line, char separator, std::vector<CsvCell>& cells) {
    cells.clear();
    for (std::size_t begin = 0;;) {
        const std::size_t end = std::min(line.find(separator, begin), line.size());
        std::size_t first = begin, last = end;
        while (first < last && (line[first] == ' ' || line[first] == '\t')) ++first;
        while (last > first && (line[last - 1] == ' ' || line[last - 1] == '\t')) --last;
        cells.push_back({line.substr(first, last - first), first});
        if (end == line.size()) return;
        begin = end + 1;
    }
}

std::optional<double> csv_number(std::string_view text) {
    const std::string_view digits = text.starts_with('+') && !text.starts_with("+-") ? text.substr(1) : text;
    double value = 0.0;
    const auto [end, failure] = std::from_chars(digits.data(), digits.data() + digits.size(), value);
    // What is too small for a double is 0 for a sample; what is too large is an error of the caller's.
    if (end != digits.data() + digits.size() || digits.empty()) return std::nullopt;
    if (failure == std::errc::result_out_of_range) return std::nullopt;
    return value;
}

Place csv_place(int number, std::string_view line, std::size_t offset) {
    // A byte that goes on in a UTF-8 sequence is no column of its own.
    const auto columns = std::count_if(line.begin(), line.begin() + static_cast<std::ptrdiff_t>(offset),
                                       [](char c) { return (static_cast<unsigned char>(c) & 0xc0U) != 0x80U; });
    return {number, static_cast<int>(columns) + 1};
}

}  // namespace halflsb
