// The kind audio-eq.
#include <array>
#include <cmath>

#include "oracle/filters/band_words.hpp"
#include "oracle/filters/equaliser.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

namespace {

constexpr double most_gain_db = 60.0;
// In the order of enum EqualiserType.
constexpr std::array<std::string_view, 8> type_names{"low-pass", "high-pass", "band-pass", "band-pass-skirt",
                                                     "all-pass", "peaking",   "low-shelf", "high-shelf"};

EqualiserType type_from(std::string_view name) {
    std::size_t index = 0;
    while (type_names[index] != name) ++index;
    return static_cast<EqualiserType>(index);
}

bool is_shelf(EqualiserType type) { return type == EqualiserType::low_shelf || type == EqualiserType::high_shelf; }
bool has_gain(EqualiserType type) { return type == EqualiserType::peaking || is_shelf(type); }
bool has_bandwidth(EqualiserType type) {
    return type == EqualiserType::band_pass || type == EqualiserType::band_pass_skirt ||
           type == EqualiserType::peaking || type == EqualiserType::all_pass;
}

std::string of_type(EqualiserType type) {
    return "type = \"" + std::string(type_names[static_cast<std::size_t>(type)]) + "\"";
}

std::optional<Error> width_refusal(const EqualiserDesign& design, std::string_view name) {
    if (design.width_is == EqualiserWidth::bandwidth_octaves && !has_bandwidth(design.type)) {
        return refuse(name, of_type(design.type) + " has no bandwidth", "give q instead");
    }
    if (design.width_is != EqualiserWidth::shelf_slope) return std::nullopt;
    if (!is_shelf(design.type)) return refuse(name, of_type(design.type) + " has no slope", "give q instead");
    const double steepest = steepest_slope(design.gain_db);
    if (design.width < steepest) return std::nullopt;
    const double most = std::floor(steepest * 1e4) / 1e4;
    return refuse(
        name, "a shelf of " + number_text(design.gain_db) + " dB cannot have a slope of " + number_text(design.width),
        "give " + number_text(most < steepest ? most : most - 1e-4) + " or less; up to 1 it is monotonic");
}

std::optional<Error> gain_refusal(EqualiserType type, const ParameterValues& values) {
    if (has_gain(type) == values.has("gain_db")) return std::nullopt;
    if (has_gain(type)) return refuse("gain_db", "gain_db is missing", "give the gain that " + of_type(type) + " has");
    return refuse("gain_db", of_type(type) + " has no gain_db", "leave gain_db out");
}

bool is_held(const EqualiserDesign& design) { return is_held(std::vector{designed_section(design)}); }

// Nearer to a quarter of the rate first; a width that double precision does not hold even there must change.
Error loss_refusal(const EqualiserDesign& design, std::string_view width_name) {
    const double middle_hz = 0.25 * design.rate_hz;
    const std::string problem = "a section at " + number_text(design.frequency_hz) + " Hz" +
                                not_held({designed_section(design)}, design.rate_hz);
    const auto moved = [&](double frequency_hz) {
        EqualiserDesign other = design;
        other.frequency_hz = frequency_hz;
        return is_held(other);
    };
    if (!moved(middle_hz)) return refuse(width_name, problem, "give a wider section");
    if (design.frequency_hz < middle_hz) {
        return refuse("frequency_hz", problem,
                      "give " + number_text(first_that_does(design.frequency_hz, middle_hz, moved)) +
                          " Hz or more, or a wider section");
    }
    const double half_hz = 0.5 * design.rate_hz;
    const double distance_hz = first_that_does(half_hz - design.frequency_hz, half_hz - middle_hz,
                                               [&](double distance) { return moved(half_hz - distance); });
    return refuse("frequency_hz", problem,
                  "give " + number_text(half_hz - distance_hz) + " Hz or less, or a wider section");
}

Outcome<FilterDesign> make_equaliser(const Recipe& recipe, const ParameterValues& values, const StageContext& context) {
    if (auto error = misfit_of(recipe, values)) return *error;
    const auto width = one_of(values, {"q", "bandwidth_octaves", "shelf_slope"});
    if (!width) return width.error();
    EqualiserDesign design;
    design.type = type_from(*values.text(recipe, "type"));
    design.rate_hz = context.rate_hz;
    design.frequency_hz = *values.number(recipe, "frequency_hz");
    design.width_is = *width == "q"             ? EqualiserWidth::q
                      : *width == "shelf_slope" ? EqualiserWidth::shelf_slope
                                                : EqualiserWidth::bandwidth_octaves;
    design.width = *values.number(recipe, *width);
    if (auto error = beyond_nyquist("frequency_hz", design.frequency_hz, design.rate_hz)) return *error;
    if (auto error = gain_refusal(design.type, values)) return *error;
    if (has_gain(design.type)) design.gain_db = *values.number(recipe, "gain_db");
    if (auto error = width_refusal(design, *width)) return *error;
    if (!is_held(design)) return loss_refusal(design, *width);
    return FilterDesign(BiquadCascade{{designed_section(design)}});
}

}  // namespace

FilterKind equaliser_kind() {
    Parameter frequency =
        frequency_parameter("frequency_hz", "The corner, the centre, or the middle of a shelf's slope.");
    frequency.required = true;
    return {
        {"audio-eq",
         "A section of the Audio EQ Cookbook (R. Bristow-Johnson), its width given in one of three ways; its notch "
         "is the kind notch.",
         {{.name = "type",
           .type = ParameterType::choice,
           .required = true,
           .choices = {type_names.begin(), type_names.end()},
           .help = "band-pass has gain 1 at frequency_hz, band-pass-skirt q."},
          frequency,
          {.name = "q",
           .type = ParameterType::real,
           .minimum = 0.01,
           .maximum = 1e4,
           .help = "The quality: gain of low-pass and high-pass at frequency_hz; frequency_hz over width of the rest."},
          {.name = "bandwidth_octaves",
           .type = ParameterType::real,
           .unit = "octaves",
           .minimum = 1e-4,
           .maximum = 10.0,
           .help = "Instead of q, of band-pass, all-pass and peaking: between -3 dB points, or those of half gain_db."},
          {.name = "shelf_slope",
           .type = ParameterType::real,
           .minimum = 0.01,
           .maximum = 10.0,
           .help = "Instead of q, of shelves: 1 is the steepest that is still monotonic."},
          {.name = "gain_db",
           .type = ParameterType::real,
           .unit = "dB",
           .minimum = -most_gain_db,
           .maximum = most_gain_db,
           .help = "Of peaking at frequency_hz, of a shelf at its end."}}},
        make_equaliser,
        complaint_about_sections};
}

}  // namespace halflsb
