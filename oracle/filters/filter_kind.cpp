#include "oracle/filters/filter_kind.hpp"

#include <array>
#include <charconv>
#include <cmath>

#include "stimuli/number_text.hpp"

namespace halflsb {

Error refuse(std::string_view place, std::string problem, std::string remedy) {
    return Error{ErrorKind::input, std::string(place), std::move(problem), std::move(remedy)};
}

std::string text_of(double number) {
    std::array<char, 32> text{};
    const auto end = std::to_chars(text.data(), text.data() + text.size(), number).ptr;
    return std::string(text.data(), end);
}

std::string text_of(std::size_t number) { return std::to_string(number); }

std::string text_of_radius(double radius) {
    std::array<char, 32> text{};
    const auto end = std::to_chars(text.data(), text.data() + text.size(), radius, std::chars_format::general, 9).ptr;
    return std::string(text.data(), end);
}

Outcome<std::string> one_of(const ParameterValues& values, std::initializer_list<std::string_view> names) {
    std::string all, given;
    std::size_t number = 0, count = 0;
    for (const std::string_view name : names) {
        ++number;
        if (number > 1) all += number == names.size() ? " or " : ", ";
        all += name;
        if (!values.has(name)) continue;
        ++count;
        given = name;  // the last one is to blame when there are more
    }
    if (count == 1) return given;
    if (count == 0) return refuse(*names.begin(), all + " is missing", "give one of them");
    return refuse(given, all + (names.size() == 2 ? ": both are given" : ": more than one is given"),
                  "keep one of them");
}

std::optional<Error> unusable_number(std::string_view place, double number) {
    if (std::fabs(number) <= largest_coefficient) return std::nullopt;
    return refuse(place, text_of(number) + " is no coefficient",
                  "give numbers from -" + text_of(largest_coefficient) + " to " + text_of(largest_coefficient));
}

std::optional<Error> beyond_nyquist(std::string_view place, double frequency_hz, double rate_hz) {
    const double nyquist_hz = 0.5 * rate_hz;
    if (frequency_hz < nyquist_hz) return std::nullopt;
    return refuse(
        place, number_text(frequency_hz) + " Hz is not below half the sample rate, " + number_text(nyquist_hz) + " Hz",
        "give less than " + number_text(nyquist_hz) + " Hz");
}

Parameter fraction_bits_parameter() {
    Parameter bits;
    bits.name = fraction_bits_name;
    bits.type = ParameterType::integer;
    bits.unit = "bits";
    bits.minimum = 0.0;
    bits.maximum = most_fraction_bits;
    bits.help = "The firmware stores each coefficient as a multiple of 2^-this, rounded half away from zero.";
    return bits;
}

Parameter coefficients_parameter(std::string_view name, ParameterType type, std::string_view help) {
    Parameter parameter;
    parameter.name = name;
    parameter.type = type;
    parameter.minimum = -largest_coefficient;
    parameter.maximum = largest_coefficient;
    parameter.help = help;
    return parameter;
}

}  // namespace halflsb
