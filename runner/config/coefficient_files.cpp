#include "runner/config/coefficient_files.hpp"

#include <cmath>

#include "runner/world/printable.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::string_view bits_word = "coefficient_fraction_bits", file_bits_word = "file_fraction_bits";

std::string path_of(const ParameterValues& values, std::string_view key) {
    return std::get<std::string>(values.all().find(key)->second);
}

}  // namespace

CoefficientFiles::CoefficientFiles(ReadContext& context, TableReader& reader, const Recipe& recipe,
                                   ParameterValues& values)
    : context_(context),
      reader_(reader),
      values_(values),
      idle_word_(idle_file_word(recipe, values)),
      words_(file_words(recipe, values)) {
    if (!words_) return;
    table_ = table_of(*words_);
    if (!values.has(file_design_word)) return;
    design_words_.emplace();
    design_words_->set = words_->set;
    design_words_->key = file_design_word;
    // A design may pass most of its energy late: it is what the file is compared with.
    design_words_->order = "newest-first";
    design_ = table_of(*design_words_);
}

std::optional<CoefficientTable> CoefficientFiles::table_of(const FileWords& words) {
    const std::string path = path_of(values_, words.key);
    const auto bytes = context_.read_named_file(path, largest_named_file_bytes);
    if (!bytes) {
        const Error& error = bytes.error();
        refuse(words.key, words.key + " = " + quoted(path) + ": " + printable(error.problem), printable(error.remedy));
        return std::nullopt;
    }
    const CoefficientFileKind kind = coefficient_file_kind(path, *bytes);
    if (kind == CoefficientFileKind::npy) {
        auto table = read_coefficient_table(path, *bytes, words);
        if (auto* problem = std::get_if<FileProblem>(&table)) {
            refuse(words, *problem);
            return std::nullopt;
        }
        return std::get<CoefficientTable>(std::move(table));
    }
    const SourceText source(context_.root + "/" + path, std::string(*bytes));
    // Comments of a firmware may be in any encoding; that it is text a NUL byte denies.
    const std::size_t nul = source.bytes().find('\0');
    const bool is_c = kind == CoefficientFileKind::c_source;
    auto no_text = is_c && nul == std::string::npos ? std::nullopt : source.not_text();
    if (no_text) {
        context_.problems.add_rendered(reader_.place_of(words.key), std::move(*no_text));
        return std::nullopt;
    }
    auto table = read_coefficient_table(path, source.bytes(), words);
    if (auto* problem = std::get_if<FileProblem>(&table)) {
        refuse(words, *problem);
        return std::nullopt;
    }
    return std::get<CoefficientTable>(std::move(table));
}

std::optional<FileCoefficients> CoefficientFiles::coefficients_of(const CoefficientTable& table, const FileWords& words,
                                                                  std::optional<int> stored_bits) {
    auto read = file_coefficients(table, words, stored_bits);
    if (auto* problem = std::get_if<FileProblem>(&read)) {
        refuse(words, *problem);
        return std::nullopt;
    }
    return std::get<FileCoefficients>(std::move(read));
}

bool CoefficientFiles::settle(const StageArithmetic& arithmetic, const Signal* signal, bool is_only_stage) {
    if (!idle_word_.empty()) {
        refuse(idle_word_, std::string(idle_word_) + " says how a file is read, and the stage names none",
               "name a file, or leave it out");
        return false;
    }
    if (!words_) return true;
    std::optional<int> stored_bits = arithmetic.coefficient_fraction_bits;
    if (const auto own = values_.all().find(bits_word); own != values_.all().end())
        stored_bits = static_cast<int>(std::get<std::int64_t>(own->second));
    auto read = coefficients_of(*table_, *words_, stored_bits);
    if (!read || !settle_bits(*read, arithmetic)) return false;
    if (signal != nullptr && !has_sensible_gain(*read, *signal, is_only_stage)) return false;
    if (design_) {
        auto design = coefficients_of(*design_, *design_words_, std::nullopt);
        if (!design) return false;
        if (const auto problem = differs_from_design(*read, *words_, design->numbers)) {
            refuse(*words_, *problem);
            return false;
        }
        values_.set(std::string(file_design_word), std::move(design->numbers));
    }
    values_.set(words_->key, std::move(read->numbers));
    return true;
}

/// The integers of a file are what the firmware stores, so they say its fraction bits.
bool CoefficientFiles::settle_bits(const FileCoefficients& read, const StageArithmetic& arithmetic) {
    if (!read.fraction_bits) return true;
    const int bits = *read.fraction_bits;
    const std::string file_bits = std::string(file_bits_word) + " = " + std::to_string(bits);
    if (const auto own = values_.all().find(bits_word); own != values_.all().end()) {
        const auto said = std::get<std::int64_t>(own->second);
        if (said == bits) return true;
        refuse(
            bits_word,
            std::string(bits_word) + " = " + std::to_string(said) + ", and the file holds integers of " + file_bits,
            "the file is what the firmware stores: leave " + std::string(bits_word) + " out, or correct one of them");
        return false;
    }
    if (arithmetic.coefficient_fraction_bits && *arithmetic.coefficient_fraction_bits != bits) {
        refuse(file_bits_word,
               file_bits + ", and the arithmetic says " + std::string(bits_word) + " = " +
                   std::to_string(*arithmetic.coefficient_fraction_bits),
               "write " + std::string(bits_word) + " = " + std::to_string(bits) +
                   " in this [[filter]] if its coefficients are stored so, or correct one of them");
        return false;
    }
    values_.set(std::string(bits_word), static_cast<std::int64_t>(bits));
    return true;
}

/// Taps with a wrong scale: the least that can come in fills the output, or the most gives nothing.
bool CoefficientFiles::has_sensible_gain(const FileCoefficients& read, const Signal& signal, bool is_only_stage) {
    if (read.set != CoefficientSet::taps || !signal.input.has_lsb() || !signal.output.has_lsb()) return true;
    double gain = 0.0;
    for (const double tap : read.numbers) gain += std::fabs(tap);
    const std::string_view blamed = words_->fraction_bits ? file_bits_word
                                    : words_->scale       ? std::string_view("file_scale")
                                                          : std::string_view(words_->key);
    const double through = gain * std::fabs(signal.output_per_input);
    const std::string what = std::string(blamed) + ": the taps sum up to " + number_text(gain) + ", so ";
    if (through * lsb_value(signal.input) >= full_scale_value(signal.output) / 4.0) {
        refuse(blamed, what + "1 LSB at the input could fill a quarter of the output",
               "say what the numbers in the file are worth: file_fraction_bits or file_scale");
        return false;
    }
    if (is_only_stage && through * full_scale_value(signal.input) < lsb_value(signal.output) / 2.0) {
        refuse(blamed, what + "full scale at the input gives less than half an LSB",
               "say what the numbers in the file are worth: file_fraction_bits or file_scale");
        return false;
    }
    return true;
}

void CoefficientFiles::refuse(const FileWords& words, const FileProblem& problem) {
    if (!problem.byte) {
        refuse(problem.word.empty() ? std::string_view(words.key) : std::string_view(problem.word), problem.problem,
               problem.remedy);
        return;
    }
    const std::string path = path_of(values_, words.key);
    const std::string shown = context_.root + "/" + path;
    const auto bytes = context_.read_named_file(path, largest_named_file_bytes);
    if (!bytes) return;  // it was read a moment ago
    std::string text;
    if (coefficient_file_kind(path, *bytes) == CoefficientFileKind::npy) {
        text = render_without_line(shown, "byte " + std::to_string(*problem.byte) + ": " + problem.problem,
                                   problem.remedy);
    } else {
        const SourceText source(shown, std::string(*bytes));
        text = source.render(source.place_of_byte(*problem.byte), problem.problem, problem.remedy);
    }
    context_.problems.add_rendered(reader_.place_of(words.key), std::move(text));
}

void CoefficientFiles::refuse(std::string_view word, std::string problem, std::string remedy) {
    // A word that the plan does not have yet is told where it names the file.
    const bool is_there = values_.has(word) || !words_;
    reader_.refuse({ErrorKind::input, std::string(is_there ? word : std::string_view(words_->key)), std::move(problem),
                    std::move(remedy)});
}

}  // namespace halflsb
