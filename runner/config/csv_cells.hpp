// The cells of a line of a CSV file, with their places. Inside this room only.
#pragma once

#include <optional>
#include <string_view>
#include <vector>

#include "runner/config/source_text.hpp"

namespace halflsb {

struct CsvCell {
    std::string_view text;   ///< without blanks around it
    std::size_t offset = 0;  ///< of the text in the line, bytes
};

/// At least one; `cells` is emptied before.
void split_cells(std::string_view line, char separator, std::vector<CsvCell>& cells);

/// The whole text as a number; it may be NaN or infinite.
std::optional<double> csv_number(std::string_view text);

/// Of what stands so many bytes into a line; lines count from 1.
Place csv_place(int number, std::string_view line, std::size_t offset);

}  // namespace halflsb
