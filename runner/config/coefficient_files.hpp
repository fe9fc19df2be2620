// The files of coefficients that a stage names, opened under the root and read as the stage's words say
// (oracle/filters/coefficient_file.hpp). What is wrong in a file is told at its own line and column, or byte.
#pragma once

#include <optional>

#include "oracle/filters/coefficient_file.hpp"
#include "oracle/judge/plan.hpp"
#include "runner/config/reader.hpp"

namespace halflsb {

class CoefficientFiles {
public:
    /// Opens and reads what the stage names; what is wrong is reported. `values` are the stage's own, with the paths
    /// of its files; they and the recipe must outlive this.
    CoefficientFiles(ReadContext& context, TableReader& reader, const Recipe& recipe, ParameterValues& values);

    /// Puts the coefficients in the place of the paths, and coefficient_fraction_bits beside them where the file says
    /// it and the plan does not. `is_only_stage`: what it gives is what comes out. False after a report.
    bool settle(const StageArithmetic& arithmetic, const Signal* signal, bool is_only_stage);

private:
    std::optional<CoefficientTable> table_of(const FileWords& words);
    std::optional<FileCoefficients> coefficients_of(const CoefficientTable& table, const FileWords& words,
                                                    std::optional<int> stored_bits);
    bool settle_bits(const FileCoefficients& read, const StageArithmetic& arithmetic);
    bool has_sensible_gain(const FileCoefficients& read, const Signal& signal, bool is_only_stage);
    void refuse(const FileWords& words, const FileProblem& problem);
    void refuse(std::string_view word, std::string problem, std::string remedy);

    ReadContext& context_;
    TableReader& reader_;
    ParameterValues& values_;
    std::string_view idle_word_;  ///< a word about a file where none is named; ""
    std::optional<FileWords> words_, design_words_;
    std::optional<CoefficientTable> table_, design_;
};

}  // namespace halflsb
