// Whatever a C source holds, its reader answers: finite numbers and their places in the file, or a whole refusal. The
// same bytes go through the reader of text tables, and what comes out through the words of a plan.
#include <algorithm>
#include <cmath>
#include <string>
#include <string_view>

#include "oracle/filters/coefficient_file.hpp"
#include "tests/fuzz/target.hpp"

using namespace halflsb;

namespace {

void check_problem(const FileProblem& problem, std::size_t size) {
    fuzz::require(!problem.problem.empty() && !problem.remedy.empty(), "a refusal says what and what to do",
                  problem.problem);
    fuzz::require(!problem.byte || *problem.byte <= size, "its place lies in the file", problem.problem);
    fuzz::require(!problem.byte || problem.word.empty(), "it is about the file or about the plan", problem.problem);
    for (const std::string* text : {&problem.problem, &problem.remedy}) {
        const bool is_shown = std::all_of(text->begin(), text->end(), [](char c) { return c >= ' ' && c <= '~'; });
        fuzz::require(is_shown, "it can be shown on any terminal", *text);
        fuzz::require(text->size() < 2000, "it can be read", *text);
    }
}

void check_table(const CoefficientTable& table, std::size_t size) {
    fuzz::require(!table.numbers.empty() && table.numbers.size() <= most_file_numbers, "a table has numbers");
    fuzz::require(table.places.size() == table.numbers.size(), "each number has a place");
    for (std::size_t i = 0; i < table.numbers.size(); ++i) {
        fuzz::require(std::isfinite(table.numbers[i]), "a number is finite");
        fuzz::require(table.places[i] <= size, "a place lies in the file");
    }
    fuzz::require(table.row_numbers == 0 || table.numbers.size() % table.row_numbers == 0, "rows are whole");
}

void check_coefficients(const CoefficientTable& table, const FileWords& words, std::size_t size) {
    const auto read = file_coefficients(table, words, 15);
    if (const auto* problem = std::get_if<FileProblem>(&read)) return check_problem(*problem, size);
    const auto& made = std::get<FileCoefficients>(read);
    fuzz::require(!made.numbers.empty() && made.places.size() == made.numbers.size(), "coefficients have places");
    fuzz::require(words.set == CoefficientSet::taps || made.numbers.size() % 5 == 0, "sections have five");
    if (!made.fraction_bits) return;
    for (const double number : made.numbers) {
        const double stored = std::ldexp(number, *made.fraction_bits);
        fuzz::require(stored == std::trunc(stored), "stored coefficients are whole");
    }
}

}  // namespace

/// The first byte chooses the words, "" or a name up to a NUL byte is the array's; the rest is the file.
extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
    if (size == 0) return 0;
    const std::uint8_t choice = data[0];
    std::string_view text(reinterpret_cast<const char*>(data) + 1, size - 1);
    FileWords words;
    words.set = (choice & 1U) != 0 ? CoefficientSet::sections : CoefficientSet::taps;
    words.key = words.set == CoefficientSet::taps ? "taps_file" : "sections_file";
    if (const std::size_t nul = text.find('\0'); nul != std::string_view::npos) {
        words.array = text.substr(0, nul);
        text.remove_prefix(nul + 1);
    }
    if ((choice & 2U) != 0) words.fraction_bits = 15;
    if ((choice & 4U) != 0) words.feedback = "added";
    if ((choice & 8U) != 0) words.padding_after = 1;
    if ((choice & 16U) != 0) words.layout = "b0 0 b1 b2 a1 a2";
    if ((choice & 32U) != 0) words.count = 2;
    for (const char* path : {"f.h", "f.txt", "f.npy"}) {
        FileWords of_file = words;
        if ((choice & 64U) != 0 && path[2] == 'h') of_file.word_bits = 16;
        const auto read = read_coefficient_table(path, text, of_file);
        if (const auto* problem = std::get_if<FileProblem>(&read)) {
            check_problem(*problem, text.size());
            continue;
        }
        check_table(std::get<CoefficientTable>(read), text.size());
        check_coefficients(std::get<CoefficientTable>(read), of_file, text.size());
    }
    return 0;
}
