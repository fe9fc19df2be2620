// The words of a plan about a file of coefficients.
#include <algorithm>
#include <array>

#include "oracle/filters/c_array.hpp"
#include "oracle/filters/coefficient_file.hpp"
#include "oracle/filters/npy_table.hpp"
#include "oracle/filters/text_table.hpp"

namespace halflsb {

namespace {

constexpr double most_padding = static_cast<double>(most_file_numbers);

std::vector<Parameter> common_words() {
    return {
        {.name = "file_array",
         .type = ParameterType::text,
         .maximum = 200.0,
         .help = "The array of a C source, or the column of a text file, where the file has more than one."},
        {.name = "file_fraction_bits",
         .type = ParameterType::integer,
         .unit = "bits",
         .minimum = 0.0,
         .maximum = 62.0,
         .help = "A coefficient is the number in the file times 2^-this: 15 for the integers of q15."},
        {.name = "file_scale",
         .type = ParameterType::real,
         .minimum = 0.0,
         .maximum = 1e9,
         .above_minimum = true,
         .help = "Instead of file_fraction_bits: a coefficient is the number in the file times this."},
        {.name = "file_word_bits",
         .type = ParameterType::integer,
         .unit = "bits",
         .minimum = 8.0,
         .maximum = 64.0,
         .help = "Width of the signed integers of a C array whose type does not say it: a struct, an int."},
        {.name = "file_padding_before",
         .type = ParameterType::integer,
         .unit = "numbers",
         .minimum = 0.0,
         .maximum = most_padding,
         .help = "So many numbers at the front of the file's list must be 0 and are no coefficients."},
        {.name = "file_padding_after",
         .type = ParameterType::integer,
         .unit = "numbers",
         .minimum = 0.0,
         .maximum = most_padding,
         .help = "So many numbers at the end of the file's list must be 0 and are no coefficients."},
    };
}

Parameter count_word(std::string_view what) {
    Parameter count;
    count.name = "file_count";
    count.type = ParameterType::integer;
    count.unit = what;
    count.minimum = 1.0;
    count.maximum = 65536.0;
    count.help = "How many there must be, padding left out.";
    return count;
}

Parameter design_word() {
    return {.name = file_design_word,
            .type = ParameterType::file,
            .minimum = -1e9,
            .maximum = 1e9,
            .help =
                "A file with the design in double, newest sample first or b0 b1 b2 a1 a2: the coefficients must be "
                "within one LSB of it."};
}

Parameter optional_choice(std::string_view name, std::vector<std::string_view> choices) {
    Parameter choice;
    choice.name = name;
    choice.type = ParameterType::choice;
    choice.choices = std::move(choices);
    choice.optional_choice = true;
    return choice;
}

std::vector<Parameter> words_of(CoefficientSet set) {
    std::vector<Parameter> words = common_words();
    if (set == CoefficientSet::taps) {
        words.push_back(count_word("taps"));
        words.push_back(optional_choice("file_order", {"newest-first", "oldest-first"}));
        words.back().help =
            "Which tap stands first in the file: that of the newest sample unless it says oldest-first.";
    } else {
        words.push_back(count_word("sections"));
        words.push_back({.name = "file_layout",
                         .type = ParameterType::text,
                         .maximum = 200.0,
                         .help =
                             "What stands in each section's group, in words out of b0 b1 b2 a0 a1 a2, 0 (must be 0) "
                             "and - (not looked at); b0 b1 b2 a1 a2 when left out."});
        words.push_back(optional_choice("file_feedback", {"subtracted", "added"}));
        words.back().help =
            "What the firmware does with a1 and a2: added means that the file holds them with the opposite sign.";
    }
    words.push_back(design_word());
    return words;
}

}  // namespace

void add_file_words(Recipe& recipe) {
    const bool has_taps = find_parameter(recipe, taps_file_word) != nullptr;
    if (!has_taps && find_parameter(recipe, sections_file_word) == nullptr) return;
    for (Parameter& word : words_of(has_taps ? CoefficientSet::taps : CoefficientSet::sections))
        recipe.parameters.push_back(std::move(word));
}

std::optional<FileWords> file_words(const Recipe& recipe, const ParameterValues& values) {
    FileWords words;
    if (values.has(taps_file_word)) {
        words.key = taps_file_word;
    } else if (values.has(sections_file_word)) {
        words.key = sections_file_word;
        words.set = CoefficientSet::sections;
    } else {
        return std::nullopt;
    }
    const auto whole = [&](std::string_view name) -> std::optional<int> {
        const auto number = values.integer(recipe, name);
        return number ? std::optional(static_cast<int>(*number)) : std::nullopt;
    };
    words.array = values.text(recipe, "file_array").value_or("");
    words.word_bits = whole("file_word_bits");
    words.fraction_bits = whole("file_fraction_bits");
    words.count = whole("file_count");
    words.scale = values.number(recipe, "file_scale");
    words.order = values.text(recipe, "file_order");
    words.feedback = values.text(recipe, "file_feedback");
    words.layout = values.text(recipe, "file_layout");
    words.padding_before = static_cast<std::size_t>(whole("file_padding_before").value_or(0));
    words.padding_after = static_cast<std::size_t>(whole("file_padding_after").value_or(0));
    return words;
}

std::string_view idle_file_word(const Recipe& recipe, const ParameterValues& values) {
    if (values.has(taps_file_word) || values.has(sections_file_word)) return {};
    for (const Parameter& parameter : recipe.parameters) {
        if (parameter.name.starts_with("file_") && values.has(parameter.name)) return parameter.name;
    }
    return {};
}

CoefficientFileKind coefficient_file_kind(std::string_view path, std::string_view bytes) {
    constexpr std::array<std::string_view, 9> c_endings = {".h",  ".hh",  ".hpp", ".hxx", ".c",
                                                           ".cc", ".cpp", ".cxx", ".inc"};
    if (bytes.starts_with("\x93NUMPY") || path.ends_with(".npy")) return CoefficientFileKind::npy;
    const bool is_c =
        std::any_of(c_endings.begin(), c_endings.end(), [&](auto ending) { return path.ends_with(ending); });
    return is_c ? CoefficientFileKind::c_source : CoefficientFileKind::text;
}

ReadTable read_coefficient_table(std::string_view path, std::string_view bytes, const FileWords& words) {
    const CoefficientFileKind kind = coefficient_file_kind(path, bytes);
    if (words.word_bits && kind != CoefficientFileKind::c_source) {
        return FileProblem{std::nullopt, "file_word_bits", "file_word_bits is about a C source, and this file is none",
                           "leave it out"};
    }
    switch (kind) {
        case CoefficientFileKind::c_source:
            return read_c_array(bytes, {words.array, words.word_bits, words.count.has_value()});
        case CoefficientFileKind::text:
            return read_text_table(bytes, words.array);
        case CoefficientFileKind::npy:
            break;
    }
    if (!words.array.empty()) {
        return FileProblem{std::nullopt, "file_array",
                           "file_array chooses in a C source or a text file, an NPY holds one array", "leave it out"};
    }
    return read_npy_table(std::as_bytes(std::span(bytes)));
}

}  // namespace halflsb
