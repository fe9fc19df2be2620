#include "oracle/filters/section_layout.hpp"

#include <algorithm>
#include <array>

namespace halflsb {

namespace {

constexpr std::array<std::string_view, 8> known_words = {"b0", "b1", "b2", "a0", "a1", "a2", "0", "-"};

std::string joined(const std::vector<std::string>& words) {
    std::string text;
    for (const std::string& word : words) text += (text.empty() ? "" : " ") + word;
    return text;
}

}  // namespace

std::optional<SectionLayout> section_layout(std::string_view text) {
    SectionLayout layout;
    while (!text.empty()) {
        const std::size_t blank = std::min(text.find(' '), text.size());
        const std::string word(text.substr(0, blank));
        text.remove_prefix(std::min(blank + 1, text.size()));
        if (word.empty()) continue;
        if (std::find(known_words.begin(), known_words.end(), word) == known_words.end()) return std::nullopt;
        const bool is_coefficient = word != "0" && word != "-";
        if (is_coefficient && std::find(layout.begin(), layout.end(), word) != layout.end()) return std::nullopt;
        layout.push_back(word);
    }
    if (std::find(layout.begin(), layout.end(), "b0") == layout.end()) return std::nullopt;
    return layout;
}

std::variant<SectionLayout, FileProblem> layout_of(const CoefficientTable& table, const FileWords& words) {
    const auto named = section_layout(joined(table.column_names));
    if (words.layout) {
        const auto layout = section_layout(*words.layout);
        if (!layout) {
            return FileProblem{
                std::nullopt, "file_layout",
                "file_layout = " + quoted_from_file(*words.layout) + " is no order of coefficients",
                "name each of b0 b1 b2 a0 a1 a2 at most once, b0 at least; 0 for a number that must be 0, "
                "- for one that does not count"};
        }
        if (named && *named != *layout) {
            return FileProblem{std::nullopt, "file_layout",
                               "file_layout = " + quoted_from_file(*words.layout) +
                                   ", and the file calls its columns " + quoted_from_file(joined(*named)),
                               "leave file_layout out, or correct the file"};
        }
        return *layout;
    }
    if (named) return *named;
    const bool has_six = table.row_numbers == 6;
    return *section_layout(has_six ? layout_with_a0 : default_layout);
}

BiquadSection section_of(const SectionLayout& layout, std::span<const double> group, bool is_added) {
    BiquadSection section{0.0, 0.0, 0.0, 0.0, 0.0};
    for (std::size_t i = 0; i < layout.size(); ++i) {
        const std::string& word = layout[i];
        // Not -0.0 from a 0: it would be shown as -0.
        const double feedback = is_added ? 0.0 - group[i] : group[i];
        if (word == "b0") section.b0 = group[i];
        if (word == "b1") section.b1 = group[i];
        if (word == "b2") section.b2 = group[i];
        if (word == "a1") section.a1 = feedback;
        if (word == "a2") section.a2 = feedback;
    }
    return section;
}

}  // namespace halflsb
