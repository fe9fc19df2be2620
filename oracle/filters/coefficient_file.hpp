// A file of coefficients and what a plan says of it -> the coefficients of a stage.
//
// The file holds stored numbers (coefficient_table.hpp); the words of the plan say what one is worth and where it
// belongs. Done in this order: padding is checked and left out, every number times 2^-file_fraction_bits or file_scale,
// newest sample first (taps) or b0, b1, b2, a1, a2 of each section with the feedback subtracted (sections). Then the
// file is looked at for what it cannot be: a wrong count, an unstable section that is stable with other words, taps
// that look reversed, a scale at which nothing is left. No I/O.
#pragma once

#include <cstddef>
#include <optional>
#include <string>
#include <string_view>
#include <variant>
#include <vector>

#include "oracle/filters/coefficient_table.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

enum class CoefficientSet { taps, sections };

inline constexpr std::string_view taps_file_word = "taps_file", sections_file_word = "sections_file",
                                  file_design_word = "file_design";

/// What the plan says of the file of one stage; the words are those of add_file_words.
struct FileWords {
    CoefficientSet set = CoefficientSet::taps;
    std::string key;    ///< the word that names the file
    std::string array;  ///< "": the only one
    std::optional<int> word_bits, fraction_bits, count;
    std::optional<double> scale;
    std::optional<std::string> order, layout, feedback;
    std::size_t padding_before = 0, padding_after = 0;  ///< numbers

    bool is_added() const { return feedback == "added"; }
};

struct FileCoefficients {
    CoefficientSet set = CoefficientSet::taps;
    /// Taps, that of the newest sample first; or b0, b1, b2, a1, a2 of each section, feedback subtracted.
    std::vector<double> numbers;
    std::vector<std::size_t> places;  ///< the byte of the file where each stands; of one that it lacks, its section's
    /// All are whole multiples of 2^-this, because the file holds integers of so many fraction bits.
    std::optional<int> fraction_bits;
};

/// Adds the words to a recipe that has taps_file or sections_file; others are left as they are.
void add_file_words(Recipe& recipe);
/// Nullopt where the stage names no file.
std::optional<FileWords> file_words(const Recipe& recipe, const ParameterValues& values);
/// The first word about a file that is given although the stage names none; "" when there is none.
std::string_view idle_file_word(const Recipe& recipe, const ParameterValues& values);

enum class CoefficientFileKind { c_source, npy, text };
/// By the ending of the name (.h .hh .hpp .hxx .c .cc .cpp .cxx .inc, .npy) or the first bytes of an NPY.
CoefficientFileKind coefficient_file_kind(std::string_view path, std::string_view bytes);

/// The numbers as the file has them. Text and C sources come without a byte order mark.
ReadTable read_coefficient_table(std::string_view path, std::string_view bytes, const FileWords& words);

using ReadCoefficients = std::variant<FileCoefficients, FileProblem>;
/// `stored_bits` is what the plan says elsewhere of coefficient_fraction_bits.
ReadCoefficients file_coefficients(const CoefficientTable& table, const FileWords& words,
                                   std::optional<int> stored_bits = {});

/// What differs from a design in double, given in the canonical form of FileCoefficients: more than one LSB of the
/// file's fraction bits, or more than 2^-20 of its largest number where it has none.
std::optional<FileProblem> differs_from_design(const FileCoefficients& file, const FileWords& words,
                                               const std::vector<double>& design);

}  // namespace halflsb
