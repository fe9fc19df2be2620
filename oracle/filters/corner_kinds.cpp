// The kinds that a plan gives by a corner: one-pole, DC blocker and notch. Each is one section of a BiquadCascade.
#include <cmath>

#include "oracle/filters/band_words.hpp"
#include "oracle/filters/corner.hpp"
#include "oracle/filters/filter_kind.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

namespace {

// Below this a filter takes a thousand million samples to follow: a slip in the units, not a filter.
constexpr double least_coefficient = 1e-9;
constexpr double largest_pole = 1.0 - least_coefficient;
constexpr double most_shift_bits = 29.0;  // 2^-29 is above the least coefficient, 2^-30 is not
constexpr double least_q = 0.01;
constexpr double largest_q = 1e6;

FilterDesign one_section(const BiquadSection& section) { return BiquadCascade{{section}}; }

const BiquadSection& section_of(const FilterStage& stage) {
    return std::get<BiquadCascade>(stage.design).sections.front();
}

std::string rate_text(double rate_hz) { return " at " + number_text(rate_hz) + " samples a second"; }

// The coefficient that a corner stands for, neither so small that nothing ever moves.
Outcome<double> coefficient_of_corner(std::string_view name, double corner_hz, double rate_hz) {
    if (auto error = beyond_nyquist(name, corner_hz, rate_hz)) return *error;
    const double k = smoothing_of_corner(corner_hz, rate_hz);
    if (k >= least_coefficient) return k;
    constexpr double least_turns = 1.6e-10;  // 2 pi times it is 1.005e-9
    return refuse(
        name,
        number_text(corner_hz) + " Hz" + rate_text(rate_hz) + " is less than a filter in double precision follows",
        "give " + number_text(least_turns * rate_hz) + " Hz or more");
}

Outcome<double> coefficient_of_time_constant(double time_constant_s, double rate_hz) {
    const double k = smoothing_of_time_constant(time_constant_s, rate_hz);
    if (k >= least_coefficient) return k;
    constexpr double most_samples = 9.99e8;  // 1 over it is 1.001e-9
    return refuse(
        "time_constant_s",
        number_text(time_constant_s) + " s" + rate_text(rate_hz) + " is more than a filter in double precision follows",
        "give " + number_text(most_samples / rate_hz) + " s or less");
}

Outcome<FilterDesign> make_one_pole(const Recipe& recipe, const ParameterValues& values, const StageContext& context) {
    const auto name = one_of(values, {"coefficient", "shift_bits", "corner_hz", "time_constant_s"});
    if (!name) return name.error();
    if (auto error = misfit_of(recipe, values)) return *error;
    Outcome<double> k = *values.number(recipe, *name);
    if (*name == "shift_bits") k = std::ldexp(1.0, -static_cast<int>(*k));
    if (*name == "corner_hz") k = coefficient_of_corner(*name, *k, context.rate_hz);
    if (*name == "time_constant_s") k = coefficient_of_time_constant(*k, context.rate_hz);
    if (!k) return k.error();
    // k moves by up to 2^-54, so that 1 - k is a double and the gain at zero frequency exactly 1.
    const double pole = 1.0 - *k;
    return one_section({1.0 - pole, 0.0, 0.0, -pole, 0.0});
}

std::optional<std::string> complaint_about_one_pole(const FilterStage& stage) {
    if (section_of(stage).b0 != 0.0) return std::nullopt;
    return "the coefficient is 0, and the output never moves";
}

Outcome<FilterDesign> make_dc_blocker(const Recipe& recipe, const ParameterValues& values,
                                      const StageContext& context) {
    const auto name = one_of(values, {"pole", "corner_hz"});
    if (!name) return name.error();
    if (auto error = misfit_of(recipe, values)) return *error;
    double pole = *values.number(recipe, *name);
    if (*name == "corner_hz") {
        const auto k = coefficient_of_corner(*name, pole, context.rate_hz);
        if (!k) return k.error();
        pole = 1.0 - *k;
    }
    const double gain = values.text(recipe, "gain") == "unity-at-nyquist" ? 0.5 * (1.0 + pole) : 1.0;
    return one_section({gain, -gain, 0.0, -pole, 0.0});
}

std::optional<std::string> complaint_about_dc_blocker(const FilterStage& stage) {
    if (section_of(stage).a1 > -1.0) return std::nullopt;
    return "the pole is " + number_text(-section_of(stage).a1) + ", and an offset never goes";
}

Outcome<FilterDesign> make_notch(const Recipe& recipe, const ParameterValues& values, const StageContext& context) {
    if (auto error = misfit_of(recipe, values)) return *error;
    const double frequency_hz = *values.number(recipe, "frequency_hz"), q = *values.number(recipe, "q");
    if (auto error = beyond_nyquist("frequency_hz", frequency_hz, context.rate_hz)) return *error;
    FilterStage stage{one_section(notch_section(frequency_hz, q, context.rate_hz)), std::nullopt};
    // The notch is frequency_hz / q wide; below some 1e-15 of the rate the poles round onto the circle.
    if (complaint_about_sections(stage)) {
        return refuse("q",
                      number_text(q) + " at " + number_text(frequency_hz) + " Hz" + rate_text(context.rate_hz) +
                          " makes a notch too narrow for double precision",
                      "give a smaller q");
    }
    return std::move(stage.design);
}

}  // namespace

FilterKind one_pole_kind() {
    return {{"one-pole",
             "Exponential smoothing: y[n] = y[n-1] + k (x[n] - y[n-1]), k given in one of four ways.",
             {{.name = "coefficient",
               .type = ParameterType::real,
               .minimum = least_coefficient,
               .maximum = 1.0,
               .help = "The coefficient k itself."},
              {.name = "shift_bits",
               .type = ParameterType::integer,
               .unit = "bits",
               .minimum = 0.0,
               .maximum = most_shift_bits,
               .help = "Instead of coefficient: k = 2^-shift_bits, the firmware shifts instead of multiplying."},
              frequency_parameter("corner_hz", "Instead of coefficient: k = 1 - exp(-2 pi corner_hz / rate_hz)."),
              {.name = "time_constant_s",
               .type = ParameterType::real,
               .unit = "s",
               .minimum = 1e-9,
               .maximum = 1e9,
               .help = "Instead of coefficient: k = 1 - exp(-1 / (time_constant_s rate_hz))."}}},
            make_one_pole,
            complaint_about_one_pole};
}

FilterKind dc_blocker_kind() {
    return {{"dc-blocker",
             "Takes an offset out: y[n] = x[n] - x[n-1] + r y[n-1], r given in one of two ways.",
             {{.name = "pole",
               .type = ParameterType::real,
               .minimum = 0.0,
               .maximum = largest_pole,
               .help = "The pole r itself, near 1."},
              frequency_parameter("corner_hz", "Instead of pole: r = exp(-2 pi corner_hz / rate_hz)."),
              {.name = "gain",
               .type = ParameterType::choice,
               .choices = {"plain", "unity-at-nyquist"},
               .help = "plain is the equation above, 2 / (1 + r) at half the rate; unity-at-nyquist scales x by (1 + "
                       "r) / 2."}}},
            make_dc_blocker,
            complaint_about_dc_blocker};
}

FilterKind notch_kind() {
    Parameter frequency = frequency_parameter("frequency_hz", "The frequency that is taken out.");
    frequency.required = true;
    return {{"notch",
             "Takes one frequency out: the cookbook biquad of R. Bristow-Johnson, by bilinear transform.",
             {frequency,
              {.name = "q",
               .type = ParameterType::real,
               .minimum = least_q,
               .maximum = largest_q,
               .required = true,
               .help = "Its sharpness: the notch is frequency_hz / q wide where the gain is -3 dB."}}},
            make_notch,
            complaint_about_sections};
}

}  // namespace halflsb
