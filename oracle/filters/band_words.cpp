#include "oracle/filters/band_words.hpp"

#include <array>
#include <charconv>
#include <cmath>

#include "oracle/filters/section_loss.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::array<std::string_view, 4> shape_names{"low-pass", "high-pass", "band-pass", "band-stop"};

ResponseShape shape_from(std::string_view name) {
    std::size_t index = 0;
    while (shape_names[index] != name) ++index;
    return static_cast<ResponseShape>(index);
}

std::string a_shape(ResponseShape shape) { return "a " + std::string(name_of(shape)); }

// Rounded up or down to so many digits.
double in_digits(double value, int digits, bool up) {
    const double unit = std::pow(10.0, std::floor(std::log10(value)) - digits + 1);
    const double whole = up ? std::ceil(value / unit) : std::floor(value / unit);
    std::array<char, 40> text{};
    const auto end =
        std::to_chars(text.data(), text.data() + text.size(), whole * unit, std::chars_format::scientific, digits - 1);
    double read = value;
    std::from_chars(text.data(), end.ptr, read);
    return read;
}

}  // namespace

std::string_view name_of(ResponseShape shape) { return shape_names[static_cast<std::size_t>(shape)]; }

Parameter frequency_parameter(std::string_view name, std::string_view help) {
    return {.name = name,
            .type = ParameterType::real,
            .unit = "Hz",
            .minimum = least_design_hz,
            .maximum = largest_design_hz,
            .help = help};
}

std::vector<Parameter> band_parameters() {
    return {{.name = "response",
             .type = ParameterType::choice,
             .required = true,
             .choices = {shape_names.begin(), shape_names.end()},
             .help = "What it lets through."},
            frequency_parameter("corner_hz", "The corner of a low-pass or high-pass."),
            frequency_parameter("from_hz", "The lower corner of a band-pass or band-stop."),
            frequency_parameter("to_hz", "Its upper corner.")};
}

Outcome<Band> band_from(const Recipe& recipe, const ParameterValues& values, double rate_hz) {
    Band band;
    band.shape = shape_from(*values.text(recipe, "response"));
    for (const std::string_view name : {"corner_hz", "from_hz", "to_hz"}) {
        const bool wanted = (name == "corner_hz") != is_band(band.shape);
        if (values.has(name) == wanted) continue;
        const std::string words = is_band(band.shape) ? "from_hz and to_hz" : "corner_hz";
        if (wanted) {
            return refuse(
                name, std::string(name) + " is missing",
                "give " + words + ", the corner" + (is_band(band.shape) ? "s" : "") + " of " + a_shape(band.shape));
        }
        return refuse(name, a_shape(band.shape) + " has no " + std::string(name),
                      "give " + words + " instead, or another response");
    }
    if (!is_band(band.shape)) {
        band.lower_hz = band.upper_hz = *values.number(recipe, "corner_hz");
        if (auto error = beyond_nyquist("corner_hz", band.lower_hz, rate_hz)) return *error;
        return band;
    }
    band.lower_hz = *values.number(recipe, "from_hz");
    band.upper_hz = *values.number(recipe, "to_hz");
    if (auto error = beyond_nyquist("from_hz", band.lower_hz, rate_hz)) return *error;
    if (auto error = beyond_nyquist("to_hz", band.upper_hz, rate_hz)) return *error;
    if (!(band.lower_hz < band.upper_hz)) {
        return refuse(
            "to_hz",
            "the band goes from " + number_text(band.lower_hz) + " Hz to " + number_text(band.upper_hz) + " Hz",
            "give more than " + number_text(band.lower_hz) + " Hz, or exchange from_hz and to_hz");
    }
    return band;
}

double first_that_does(double bad, double good, const std::function<bool(double)>& does) {
    double reached = good;
    for (int step = 0; step < 40; ++step) {
        const double middle = std::sqrt(bad * reached);
        (does(middle) ? reached : bad) = middle;
    }
    const double rounded = in_digits(reached, 3, good > bad);
    return does(rounded) ? rounded : reached;
}

std::string rounded_text(double value, bool up) { return number_text(in_digits(value, 6, up)); }

std::string near_text(double value) {
    std::array<char, 40> text{};
    const auto end = std::to_chars(text.data(), text.data() + text.size(), value, std::chars_format::general, 6).ptr;
    return std::string(text.data(), end);
}

bool is_held(const std::vector<BiquadSection>& sections) { return loss_of(sections) <= most_loss; }

std::string not_held(const std::vector<BiquadSection>& sections, double rate_hz) {
    const double loss = loss_of(sections);
    const std::string at_rate = " at " + number_text(rate_hz) + " samples a second ";
    if (!(loss < 1.0)) return at_rate + "cannot be held in double precision";
    std::array<char, 40> text{};
    const auto end = std::to_chars(text.data(), text.data() + text.size(), loss, std::chars_format::general, 2).ptr;
    return at_rate + "can lose " + std::string(text.data(), end) + " of its gain in double precision";
}

}  // namespace halflsb
