// Files of coefficients and what is said of them.
#pragma once

#include <catch2/catch.hpp>
#include <string>
#include <vector>

#include "oracle/filters/coefficient_file.hpp"

namespace halflsb::testing {

using Numbers = std::vector<double>;

inline FileWords taps(FileWords words = {}) {
    words.key = "taps_file";
    return words;
}

inline FileWords sections(FileWords words = {}) {
    words.key = "sections_file";
    words.set = CoefficientSet::sections;
    return words;
}

inline ReadCoefficients read(const std::string& path, const std::string& bytes, const FileWords& words,
                             std::optional<int> stored_bits = {}) {
    auto table = read_coefficient_table(path, bytes, words);
    if (auto* problem = std::get_if<FileProblem>(&table)) return *problem;
    return file_coefficients(std::get<CoefficientTable>(table), words, stored_bits);
}

inline FileCoefficients coefficients_of(const std::string& path, const std::string& bytes, const FileWords& words) {
    auto made = read(path, bytes, words);
    if (const auto* problem = std::get_if<FileProblem>(&made)) FAIL(problem->problem << "\n  " << problem->remedy);
    return std::get<FileCoefficients>(std::move(made));
}

/// "at TEXT: problem / remedy" with the six bytes from its place on, or "plan WORD: ..."; "accepted".
inline std::string refusal(const std::string& path, const std::string& bytes, const FileWords& words,
                           std::optional<int> stored_bits = {}) {
    const auto made = read(path, bytes, words, stored_bits);
    const auto* problem = std::get_if<FileProblem>(&made);
    if (problem == nullptr) return "accepted";
    const std::string place = problem->byte ? "at " + bytes.substr(*problem->byte, 6) : "plan " + problem->word;
    return place + ": " + problem->problem + " / " + problem->remedy;
}

inline FileWords with_bits(FileWords words, int bits) {
    words.fraction_bits = bits;
    return words;
}

}  // namespace halflsb::testing
