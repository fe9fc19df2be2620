// What a file of coefficients holds, before a plan says what its numbers mean. No I/O: bytes in, numbers out.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

namespace halflsb {

/// Why a file is no table of coefficients, or not the one that was declared.
struct FileProblem {
    std::optional<std::size_t> byte;  ///< where in the file; none: it is about the plan
    std::string word;                 ///< of the plan, when there is no byte: "file_count"; "": the file's own key
    std::string problem;
    std::string remedy;
};

struct CoefficientTable {
    std::vector<double> numbers;      ///< in the order of the file
    std::vector<std::size_t> places;  ///< the byte at which each stands; of what a C array fills up, its end
    /// Numbers a row where the file has rows (lines, nested braces, two dimensions); 0: one long list.
    std::size_t row_numbers = 0;
    std::vector<std::string> column_names;  ///< of a text file's first line; empty when it has none
    /// The file itself says that they are integers of a word: an integer array in C or NumPy.
    bool is_integer_type = false;
    std::string type_name;  ///< "int16_t", "<i2"; "" where the file has no types
};

using ReadTable = std::variant<CoefficientTable, FileProblem>;

/// Far more than the longest filter has; what is larger is refused where it passes this.
inline constexpr std::size_t most_file_numbers = 262144;

/// "name" in quotation marks, of what a file says: characters that cannot be shown are left out, long ones cut.
std::string quoted_from_file(std::string_view text);

}  // namespace halflsb
