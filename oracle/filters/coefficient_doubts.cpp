#include "oracle/filters/coefficient_doubts.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <span>

#include "oracle/filters/filter_kind.hpp"
#include "oracle/filters/section_layout.hpp"
#include "oracle/filters/stability.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

FileProblem in_plan(std::string_view word, std::string problem, std::string remedy) {
    return {std::nullopt, std::string(word), std::move(problem), std::move(remedy)};
}

/// Canonical numbers of all groups of a file under another layout.
std::vector<double> under(const SectionLayout& layout, const std::vector<double>& scaled, bool is_added) {
    std::vector<double> numbers;
    for (std::size_t at = 0; at + layout.size() <= scaled.size(); at += layout.size()) {
        const BiquadSection s = section_of(layout, std::span(scaled).subspan(at, layout.size()), is_added);
        numbers.insert(numbers.end(), {s.b0, s.b1, s.b2, s.a1, s.a2});
    }
    return numbers;
}

BiquadSection section_at(const std::vector<double>& numbers, std::size_t at) {
    return {numbers[at], numbers[at + 1], numbers[at + 2], numbers[at + 3], numbers[at + 4]};
}

/// The first unstable one, or the count of all.
std::size_t first_unstable(const std::vector<double>& numbers) {
    for (std::size_t at = 0; at + 5 <= numbers.size(); at += 5) {
        if (!is_stable(section_at(numbers, at))) return at / 5;
    }
    return numbers.size() / 5;
}

bool is_filter(const std::vector<double>& numbers) {
    bool has_feedback = false;
    for (std::size_t at = 0; at + 5 <= numbers.size(); at += 5) {
        const BiquadSection s = section_at(numbers, at);
        if (!is_stable(s) || (s.b0 == 0.0 && s.b1 == 0.0 && s.b2 == 0.0)) return false;
        has_feedback = has_feedback || s.a1 != 0.0 || s.a2 != 0.0;
    }
    return has_feedback && !numbers.empty();
}

/// What fills up an array is no section, and the plan must say so.
std::optional<FileProblem> silent_section(const FileCoefficients& file) {
    for (std::size_t at = 0; at + 5 <= file.numbers.size(); at += 5) {
        const BiquadSection s = section_at(file.numbers, at);
        if (s.b0 != 0.0 || s.b1 != 0.0 || s.b2 != 0.0) continue;
        return FileProblem{file.places[at],
                           {},
                           "section " + text_of(at / 5 + 1) + " passes nothing: b0, b1 and b2 are 0",
                           "zeros that fill up an array are no section: say so with file_padding_after"};
    }
    return std::nullopt;
}

struct Reading {
    std::string layout;
    bool is_added = false;
};

std::string plan_words(const Reading& reading, const FileWords& words) {
    std::string text;
    if (!reading.layout.empty()) text = "file_layout = \"" + reading.layout + "\"";
    if (reading.is_added != words.is_added()) {
        text += std::string(text.empty() ? "" : " and ") + "file_feedback = \"" +
                (reading.is_added ? "added" : "subtracted") + "\"";
    }
    return text;
}

/// Other words for the same numbers, the likelier first.
std::vector<Reading> other_readings(const FileWords& words, std::size_t group) {
    const bool added = words.is_added();
    std::vector<Reading> readings{{"", !added}};
    if (group == 5) {
        readings.push_back({"a1 a2 b0 b1 b2", added});
        readings.push_back({"a1 a2 b0 b1 b2", !added});
    } else if (group == 6) {
        for (const char* layout : {"b0 0 b1 b2 a1 a2", "a0 a1 a2 b0 b1 b2"}) {
            readings.push_back({layout, added});
            readings.push_back({layout, !added});
        }
    }
    return readings;
}

/// A number that a layout wants to be 0 or 1 is it in every group.
bool holds_constants(const SectionLayout& layout, const std::vector<double>& scaled) {
    for (std::size_t i = 0; i < scaled.size(); ++i) {
        const std::string& word = layout[i % layout.size()];
        if ((word == "0" && scaled[i] != 0.0) || (word == "a0" && scaled[i] != 1.0)) return false;
    }
    return true;
}

double factor_between(const std::vector<double>& one, const std::vector<double>& other, double tolerance) {
    for (int power = -16; power <= 16; ++power) {
        if (power == 0) continue;
        const double factor = std::ldexp(1.0, power);
        bool is_equal = true;
        for (std::size_t i = 0; i < one.size() && is_equal; ++i)
            is_equal = std::fabs(one[i] - factor * other[i]) <= tolerance;
        if (is_equal) return factor;
    }
    return 0.0;
}

}  // namespace

std::optional<FileProblem> doubt_about_taps(const FileCoefficients& file, const FileWords& words) {
    if (words.order || file.numbers.size() < 3) return std::nullopt;
    const auto last = static_cast<double>(file.numbers.size() - 1);
    const double largest = std::fabs(*std::max_element(file.numbers.begin(), file.numbers.end(),
                                                       [](double a, double b) { return std::fabs(a) < std::fabs(b); }));
    double energy = 0.0, moment = 0.0;
    for (std::size_t k = 0; k < file.numbers.size(); ++k) {
        const double ratio = file.numbers[k] / largest;  // squares of small numbers must not vanish
        energy += ratio * ratio;
        moment += static_cast<double>(k) * ratio * ratio;
    }
    if (!(moment / energy > 0.5 * last + 0.1 * last + 0.5)) return std::nullopt;
    return in_plan(
        words.key, words.key + ": the taps look reversed, most of what they pass comes late",
        "write file_order = \"oldest-first\" if the file begins with the oldest, or \"newest-first\" if they "
        "are meant to be so");
}

std::optional<FileProblem> doubt_about_sections(const FileCoefficients& file, const std::vector<double>& scaled,
                                                const FileWords& words) {
    const std::size_t count = file.numbers.size() / 5, unstable = first_unstable(file.numbers);
    if (unstable == count) return silent_section(file);
    const BiquadSection s = section_at(file.numbers, unstable * 5);
    const std::string problem = "section " + text_of(unstable + 1) + " is unstable: a1 = " + text_of(s.a1) +
                                ", a2 = " + text_of(s.a2) + " put a pole at radius " + text_of_radius(pole_radius(s));
    const std::size_t group = scaled.size() / count;
    for (const Reading& reading : other_readings(words, group)) {
        std::vector<double> numbers;
        if (reading.layout.empty()) {
            numbers = file.numbers;
            for (std::size_t at = 0; at + 5 <= numbers.size(); at += 5) {
                numbers[at + 3] = -numbers[at + 3];
                numbers[at + 4] = -numbers[at + 4];
            }
        } else {
            const SectionLayout layout = *section_layout(reading.layout);
            if (!holds_constants(layout, scaled)) continue;
            numbers = under(layout, scaled, reading.is_added);
        }
        if (!is_filter(numbers)) continue;
        return in_plan(reading.layout.empty() ? "file_feedback" : "file_layout", words.key + ": " + problem,
                       "the file looks " + std::string(reading.layout.empty() ? "negated" : "ordered in another way") +
                           ": all is stable with " + plan_words(reading, words));
    }
    return FileProblem{file.places[unstable * 5 + 3],
                       {},
                       problem,
                       "poles must lie inside the unit circle; is the scale right, and the order of the numbers?"};
}

std::optional<FileProblem> differs_from_design(const FileCoefficients& file, const FileWords& words,
                                               const std::vector<double>& design) {
    const std::string word(file_design_word);
    if (design.size() != file.numbers.size()) {
        const std::size_t group = file.set == CoefficientSet::taps ? 1 : 5;
        return in_plan(
            word,
            word + " has " + text_of(design.size() / group) + ", the file " + text_of(file.numbers.size() / group),
            "compare a file with its own design");
    }
    double largest = 0.0;
    for (const double number : design) largest = std::max(largest, std::fabs(number));
    const double tolerance = file.fraction_bits ? std::ldexp(1.0, -*file.fraction_bits) : largest * 0x1p-20;
    const auto is_near = [&](const std::vector<double>& numbers) {
        for (std::size_t i = 0; i < design.size(); ++i) {
            if (!(std::fabs(numbers[i] - design[i]) <= tolerance)) return false;
        }
        return true;
    };
    if (is_near(file.numbers)) return std::nullopt;
    std::vector<double> turned = file.numbers;
    if (file.set == CoefficientSet::taps) {
        std::reverse(turned.begin(), turned.end());
        if (is_near(turned)) {
            return in_plan("file_order", words.key + ": the taps are those of " + word + " in reverse",
                           std::string("write file_order = \"") +
                               (words.order == "oldest-first" ? "newest-first" : "oldest-first") + "\"");
        }
    } else {
        for (std::size_t at = 0; at + 5 <= turned.size(); at += 5) {
            turned[at + 3] = -turned[at + 3];
            turned[at + 4] = -turned[at + 4];
        }
        if (is_near(turned)) {
            return in_plan(
                "file_feedback", words.key + ": a1 and a2 are those of " + word + " negated",
                std::string("write file_feedback = \"") + (words.is_added() ? "subtracted" : "added") + "\"");
        }
    }
    if (const double factor = factor_between(file.numbers, design, tolerance); factor != 0.0) {
        return in_plan(words.fraction_bits ? "file_fraction_bits"
                       : words.scale       ? "file_scale"
                                           : words.key,
                       words.key + ": the coefficients are " + number_text(factor) + " times those of " + word,
                       words.fraction_bits
                           ? "write file_fraction_bits = " +
                                 std::to_string(*words.fraction_bits + static_cast<int>(std::log2(factor)))
                           : "correct the scale");
    }
    std::size_t at = 0;
    while (std::fabs(file.numbers[at] - design[at]) <= tolerance) ++at;
    const std::array<const char*, 5> names = {"b0", "b1", "b2", "a1", "a2"};
    const std::string which = file.set == CoefficientSet::taps
                                  ? "tap " + text_of(at)
                                  : std::string(names[at % 5]) + " of section " + text_of(at / 5 + 1);
    return FileProblem{file.places[at],
                       {},
                       which + " is " + number_text(file.numbers[at]) + ", in the design " + number_text(design[at]) +
                           "; they may differ by " + number_text(tolerance),
                       "correct the one that is wrong"};
}

}  // namespace halflsb
