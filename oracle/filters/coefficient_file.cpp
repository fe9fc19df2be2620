#include "oracle/filters/coefficient_file.hpp"

#include <algorithm>
#include <cmath>
#include <span>

#include "oracle/filters/coefficient_doubts.hpp"
#include "oracle/filters/filter_kind.hpp"
#include "oracle/filters/section_layout.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

/// Whole numbers beyond these are hardly coefficients as they are: the plan must say what 1 is worth.
constexpr double largest_plain_integer = 127.0;

FileProblem in_file(std::size_t byte, std::string problem, std::string_view remedy) {
    return {byte, {}, std::move(problem), std::string(remedy)};
}
FileProblem in_plan(std::string_view word, std::string problem, std::string_view remedy) {
    return {std::nullopt, std::string(word), std::move(problem), std::string(remedy)};
}

bool is_whole(double number) { return std::trunc(number) == number; }

double largest_of(const std::vector<double>& numbers) {
    double largest = 0.0;
    for (const double number : numbers) largest = std::max(largest, std::fabs(number));
    return largest;
}

class Interpreter {
public:
    Interpreter(const CoefficientTable& table, const FileWords& words, std::optional<int> stored_bits)
        : table_(table), words_(words), stored_bits_(stored_bits), numbers_(table.numbers), places_(table.places) {}

    ReadCoefficients read() {
        made_.set = words_.set;
        const bool is_made = take_padding_out() && scale() &&
                             (words_.set == CoefficientSet::taps ? order_taps() : order_sections()) && check();
        if (!is_made) return *std::move(problem_);
        return std::move(made_);
    }

private:
    bool refuse(FileProblem problem) {
        problem_ = std::move(problem);
        return false;
    }

    bool take_padding_out() {
        const std::size_t before = words_.padding_before, after = words_.padding_after;
        if (before + after == 0) return true;
        const std::string_view word = after > 0 ? "file_padding_after" : "file_padding_before";
        if (before + after >= numbers_.size()) {
            return refuse(in_plan(word,
                                  std::string(word) + ": of " + text_of(numbers_.size()) + " numbers in the file " +
                                      text_of(before + after) + " would be padding",
                                  "give fewer than there are"));
        }
        for (std::size_t i = 0; i < numbers_.size(); ++i) {
            if ((i >= before && i < numbers_.size() - after) || numbers_[i] == 0.0) continue;
            return refuse(in_file(places_[i],
                                  number_text(numbers_[i]) + " stands where the plan says that there is padding",
                                  "padding is 0: correct the file, or file_padding_before and file_padding_after"));
        }
        const auto cut = [&](auto& list) {
            list.erase(list.end() - static_cast<std::ptrdiff_t>(after), list.end());
            list.erase(list.begin(), list.begin() + static_cast<std::ptrdiff_t>(before));
        };
        cut(numbers_);
        cut(places_);
        return true;
    }

    bool scale() {
        const bool whole = std::all_of(numbers_.begin(), numbers_.end(), is_whole);
        const double largest = largest_of(numbers_);
        if (words_.fraction_bits && words_.scale)
            return refuse(
                in_plan("file_scale", "file_fraction_bits and file_scale are both given", "keep one of them"));
        if (!words_.fraction_bits && !words_.scale) {
            if (largest > 0.0 && whole && (table_.is_integer_type || largest > largest_plain_integer))
                return refuse(scale_is_missing(largest));
        } else if (words_.fraction_bits && largest > 0.0 && largest < 1.0) {
            return refuse(in_plan("file_fraction_bits",
                                  "file_fraction_bits = " + std::to_string(*words_.fraction_bits) +
                                      ", but the largest number in the file is " + number_text(largest) +
                                      ": every coefficient would be below one LSB",
                                  "the numbers are no integers of a word: leave file_fraction_bits out"));
        }
        for (std::size_t i = 0; i < numbers_.size(); ++i) {
            double& number = numbers_[i];
            const double written = number;
            if (words_.fraction_bits) number = std::ldexp(number, -*words_.fraction_bits);
            if (words_.scale) number *= *words_.scale;
            if (!(std::fabs(number) <= largest_coefficient)) {
                return refuse(in_file(places_[i],
                                      number_text(written) + " is no coefficient" +
                                          (number == written ? "" : ": with its scale it is " + number_text(number)),
                                      "give numbers from -" + number_text(largest_coefficient) + " to " +
                                          number_text(largest_coefficient)));
            }
        }
        if (words_.fraction_bits && whole) made_.fraction_bits = words_.fraction_bits;
        return check_scale(largest);
    }

    FileProblem scale_is_missing(double largest) const {
        const std::string what = table_.is_integer_type ? "the file holds integers of " + table_.type_name
                                                        : "the file holds whole numbers up to " + number_text(largest);
        return in_plan(words_.key, words_.key + ": " + what + ", and what they are worth is not said",
                       "add file_fraction_bits: 15 where 32768 would be 1, 14 where 16384 would be, 0 where 1 is 1");
    }

    /// What the firmware would store of them.
    bool check_scale(double largest) {
        if (!words_.scale || !stored_bits_ || largest == 0.0) return true;
        const double value = largest * *words_.scale;
        if (!(std::ldexp(value, *stored_bits_) < 0.5)) return true;
        return refuse(in_plan("file_scale",
                              "file_scale = " + number_text(*words_.scale) + " makes the largest coefficient " +
                                  number_text(value) +
                                  ", below half an LSB of coefficient_fraction_bits = " + std::to_string(*stored_bits_),
                              "correct the scale: all coefficients would be stored as 0"));
    }

    bool order_taps() {
        const std::size_t row = table_.row_numbers;
        if (row > 1 && table_.numbers.size() > row) {
            return refuse(in_file(table_.places[row],
                                  "the numbers stand in rows of " + text_of(row) + ", and taps are one list",
                                  table_.type_name.empty() ? "name the column with file_array, if a first line names "
                                                             "them; or have the numbers a decimal comma?"
                                                           : "save one list"));
        }
        if (words_.order == "oldest-first") {
            std::reverse(numbers_.begin(), numbers_.end());
            std::reverse(places_.begin(), places_.end());
        }
        made_.numbers = numbers_;
        made_.places = places_;
        return true;
    }

    bool order_sections() {
        auto found = layout_of(table_, words_);
        if (auto* problem = std::get_if<FileProblem>(&found)) return refuse(std::move(*problem));
        const SectionLayout& layout = std::get<SectionLayout>(found);
        const std::size_t size = layout.size(), row = table_.row_numbers;
        if (row > 1 && row != size && table_.numbers.size() > row) {
            return refuse(
                in_file(table_.places[row],
                        "a row has " + text_of(row) + " numbers, and " + (words_.layout ? "file_layout" : "a section") +
                            " has " + text_of(size),
                        "say in the plan what stands in a row, for example file_layout = \"b0 0 b1 b2 a1 a2\""));
        }
        if (numbers_.size() % size != 0) {
            return refuse(in_plan(
                words_.key, words_.key + ": " + text_of(numbers_.size()) + " numbers are no whole number of sections",
                numbers_.size() % 6 == 0 && !words_.layout
                    ? "a section has 5 numbers, b0 b1 b2 a1 a2; where it has 6, say which: file_layout = \"" + six() +
                          "\""
                    : "a section has " + text_of(size) +
                          " numbers here; file_layout says which, file_padding_after what is none of them"));
        }
        for (std::size_t at = 0; at < numbers_.size(); at += size) {
            const std::span<const double> group(numbers_.data() + at, size);
            if (!check_group(layout, group, at)) return false;
            const BiquadSection s = section_of(layout, group, words_.is_added());
            for (const auto& [word, value] :
                 {std::pair{"b0", s.b0}, {"b1", s.b1}, {"b2", s.b2}, {"a1", s.a1}, {"a2", s.a2}}) {
                const auto stands = std::find(layout.begin(), layout.end(), word);
                const auto offset = static_cast<std::size_t>(stands == layout.end() ? 0 : stands - layout.begin());
                made_.numbers.push_back(value);
                made_.places.push_back(places_[at + offset]);
            }
        }
        return true;
    }

    /// Which six numbers a group may have: libraries for microcontrollers put a 0 behind b0.
    std::string six() const {
        bool has_zeros = true;
        for (std::size_t at = 1; at < numbers_.size(); at += 6) has_zeros = has_zeros && numbers_[at] == 0.0;
        return has_zeros ? "b0 0 b1 b2 a1 a2" : std::string(layout_with_a0);
    }

    bool check_group(const SectionLayout& layout, std::span<const double> group, std::size_t at) {
        const std::string which = "section " + text_of(at / layout.size() + 1);
        for (std::size_t i = 0; i < layout.size(); ++i) {
            const std::size_t place = places_[at + i];
            if (layout[i] == "0" && group[i] != 0.0) {
                return refuse(in_file(place, which + " has " + number_text(group[i]) + " where the layout has 0",
                                      "correct file_layout; write - for a number that does not count"));
            }
            if (layout[i] != "a0" || group[i] == 1.0) continue;
            return refuse(in_file(place, which + " has a0 = " + number_text(group[i]),
                                  group[0] == 1.0
                                      ? "a0 must be 1; the first number is: is the order file_layout = \"a0 "
                                        "a1 a2 b0 b1 b2\"?"
                                      : "a0 must be 1: divide the numbers of the section by it"));
        }
        return true;
    }

    bool check() {
        const std::size_t count = made_.numbers.size() / (words_.set == CoefficientSet::taps ? 1 : 5);
        if (words_.count && static_cast<std::size_t>(*words_.count) != count) {
            return refuse(
                in_plan("file_count",
                        "file_count = " + std::to_string(*words_.count) + ", and the file holds " +
                            counted(words_.set, made_.numbers.size()),
                        "correct the one that is wrong; zeros that are none of them are file_padding_before or "
                        "file_padding_after"));
        }
        if (largest_of(made_.numbers) == 0.0)
            return refuse(in_file(made_.places.front(), "all numbers are 0", "is it the array that was meant?"));
        auto doubt = words_.set == CoefficientSet::taps ? doubt_about_taps(made_, words_)
                                                        : doubt_about_sections(made_, numbers_, words_);
        return doubt ? refuse(std::move(*doubt)) : true;
    }

    const CoefficientTable& table_;
    const FileWords& words_;
    std::optional<int> stored_bits_;
    std::vector<double> numbers_;
    std::vector<std::size_t> places_;
    FileCoefficients made_;
    std::optional<FileProblem> problem_;
};

}  // namespace

ReadCoefficients file_coefficients(const CoefficientTable& table, const FileWords& words,
                                   std::optional<int> stored_bits) {
    return Interpreter(table, words, stored_bits).read();
}

}  // namespace halflsb
