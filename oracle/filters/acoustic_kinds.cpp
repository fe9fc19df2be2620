// The kinds of sound-level meters: weighting and octave-band.
#include "oracle/filters/band_words.hpp"
#include "oracle/filters/octave_band.hpp"
#include "oracle/filters/weighting.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

namespace {

constexpr double most_fraction = 24.0;
constexpr double most_band_order = 12.0;

WeightingCurve curve_from(std::string_view name) {
    if (name == "K") return WeightingCurve::k;
    return name == "C" ? WeightingCurve::c : WeightingCurve::a;
}

Outcome<FilterDesign> make_weighting(const Recipe& recipe, const ParameterValues& values, const StageContext& context) {
    if (auto error = misfit_of(recipe, values)) return *error;
    const std::string name = values.text(recipe, "curve").value_or("A");
    const WeightingCurve curve = curve_from(name);
    const double least_hz = least_weighting_rate_hz(curve), middle_hz = 1.5 * least_hz, rate_hz = context.rate_hz;
    const auto does = [&](double hz) { return hz > least_hz && is_held(weighting_sections(curve, hz)); };
    if (does(rate_hz)) return FilterDesign(BiquadCascade{weighting_sections(curve, rate_hz)});
    const std::string problem = rate_hz > least_hz
                                    ? "the weighting " + name + not_held(weighting_sections(curve, rate_hz), rate_hz)
                                    : "the weighting " + name + " is defined by what it does at " +
                                          near_text(0.5 * least_hz) + " Hz, which is not below half the sample rate";
    return refuse("curve", problem,
                  "give a rate_hz of " + number_text(first_that_does(rate_hz, middle_hz, does)) +
                      (rate_hz < middle_hz ? " or more" : " or less"));
}

std::string name_of_fraction(int fraction) {
    return fraction == 1 ? "an octave band" : "a band of 1/" + std::to_string(fraction) + " octave";
}

bool fits(const OctaveBand& band, int order, double rate_hz) {
    return band.upper_hz < 0.5 * rate_hz && is_held(octave_band_sections(band, order, rate_hz));
}

// The next band down that fits, or the rate that does.
Error above_nyquist(const OctaveBand& band, int fraction, int order, double rate_hz) {
    const double enough_hz =
        first_that_does(2.0 * band.upper_hz, 4.0 * band.upper_hz, [&](double hz) { return fits(band, order, hz); });
    OctaveBand below = band;
    while (!fits(below, order, rate_hz) && below.midband_hz > least_design_hz) {
        below = octave_band(fraction, below.index - 1);
    }
    return refuse(
        "midband_hz",
        "the upper edge of this band, " + near_text(band.upper_hz) + " Hz, is not below half the sample rate, " +
            number_text(0.5 * rate_hz) + " Hz",
        "give " + near_text(below.midband_hz) + " Hz or less, or a rate_hz of " + number_text(enough_hz) + " or more");
}

Error lost(const OctaveBand& band, int fraction, int order, double rate_hz) {
    const std::string problem = name_of_fraction(fraction) + " at " + near_text(band.midband_hz) + " Hz" +
                                not_held(octave_band_sections(band, order, rate_hz), rate_hz);
    OctaveBand next = octave_band(fraction, band.index + 1);
    for (; next.upper_hz < 0.5 * rate_hz; next = octave_band(fraction, next.index + 1)) {
        if (fits(next, order, rate_hz)) {
            return refuse("midband_hz", problem,
                          "give " + near_text(next.midband_hz) + " Hz or more, or a lower rate_hz or order");
        }
    }
    return refuse("order", problem, "give a lower order");
}

Outcome<FilterDesign> make_octave_band(const Recipe& recipe, const ParameterValues& values,
                                       const StageContext& context) {
    if (auto error = misfit_of(recipe, values)) return *error;
    const auto fraction = static_cast<int>(*values.integer(recipe, "fraction"));
    const auto order = static_cast<int>(*values.integer(recipe, "order"));
    const double midband_hz = *values.number(recipe, "midband_hz");
    const auto band = band_of(fraction, midband_hz);
    if (!band) {
        const NearestBands near = bands_near(fraction, midband_hz);
        return refuse("midband_hz", number_text(midband_hz) + " Hz is not the middle of " + name_of_fraction(fraction),
                      "the nearest are " + near_text(near.nearest.midband_hz) + " Hz and " +
                          near_text(near.other.midband_hz) + " Hz");
    }
    if (!(band->upper_hz < 0.5 * context.rate_hz)) return above_nyquist(*band, fraction, order, context.rate_hz);
    if (!fits(*band, order, context.rate_hz)) return lost(*band, fraction, order, context.rate_hz);
    return FilterDesign(BiquadCascade{octave_band_sections(*band, order, context.rate_hz)});
}

}  // namespace

FilterKind weighting_kind() {
    return {{"weighting",
             "A frequency weighting: A and C of IEC 61672-1 by the plain bilinear transform, K of ITU-R BS.1770.",
             {{.name = "curve",
               .type = ParameterType::choice,
               .required = true,
               .choices = {"A", "C", "K"},
               .help = "Which one; gain 1 at 1 kHz for A and C."}}},
            make_weighting,
            complaint_about_sections};
}

FilterKind octave_band_kind() {
    Parameter midband = frequency_parameter(
        "midband_hz", "The middle of the band, nominal (31.5) or exact (31.6228); the exact one is used.");
    midband.required = true;
    midband.minimum = 1e-3;
    midband.maximum = 1e6;
    return {
        {"octave-band",
         "An octave or fractional-octave band of IEC 61260-1, base ten: a Butterworth band-pass, -3.01 dB at the "
         "exact edges of the band.",
         {{.name = "fraction",
           .type = ParameterType::integer,
           .minimum = 1.0,
           .maximum = most_fraction,
           .required = true,
           .help = "1 for octaves, 3 for thirds, b for bands of 1/b octave."},
          midband,
          {.name = "order",
           .type = ParameterType::integer,
           .minimum = 1.0,
           .maximum = most_band_order,
           .required = true,
           .help = "Of the Butterworth low-pass that it is made from. Class 1 takes 3 where rate_hz is 6 midbands or "
                   "more, else 4."}}},
        make_octave_band,
        complaint_about_sections};
}

}  // namespace halflsb
