#include "runner/config/number_file.hpp"

#include <charconv>
#include <cmath>

#include "runner/config/reader.hpp"
#include "runner/config/value_text.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::string_view blanks = " \t";
constexpr std::string_view how = "write one number a line, with a decimal point; # starts a comment";

}  // namespace

std::variant<std::vector<double>, std::string> read_number_file(const SourceText& source, const Parameter& parameter) {
    if (auto text = source.not_text()) return *text;
    std::vector<double> numbers;
    for (int number = 1; number <= source.line_count(); ++number) {
        std::string_view line = source.line(number);
        line = line.substr(0, line.find('#'));
        const std::size_t begin = line.find_first_not_of(blanks);
        if (begin == std::string_view::npos) continue;
        line = line.substr(begin, line.find_last_not_of(blanks) - begin + 1);
        const Place place{number, static_cast<int>(begin) + 1};
        const std::string_view digits = line.front() == '+' ? line.substr(1) : line;
        double value = 0.0;
        const auto [end, failure] = std::from_chars(digits.data(), digits.data() + digits.size(), value);
        if (failure != std::errc() || end != digits.data() + digits.size() ||
            digits.starts_with('-') != line.starts_with('-')) {
            return source.render(place, quoted(line) + " is not one number", how);
        }
        if (!std::isfinite(value)) return source.render(place, quoted(line) + " is no finite number", how);
        if (!(value >= parameter.minimum) || !(value <= parameter.maximum)) {
            return source.render(place, quoted(line) + " is out of range", "give numbers " + range_text(parameter));
        }
        numbers.push_back(value);
    }
    if (numbers.empty()) return source.render({1, 1}, "there is no number in the file", how);
    return numbers;
}

}  // namespace halflsb
