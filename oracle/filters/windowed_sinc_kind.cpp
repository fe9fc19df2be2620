// The kind windowed-sinc.
#include <algorithm>
#include <array>
#include <cmath>

#include "oracle/filters/band_words.hpp"
#include "oracle/filters/windowed_sinc.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

namespace {

constexpr double most_taps = 65536.0;
constexpr double most_beta = 50.0;
// The first is the default. In the order of enum Window they are not: see window_from.
constexpr std::array<std::string_view, 5> window_names{"hamming", "rectangular", "hann", "blackman", "kaiser"};

Window window_from(std::string_view name) {
    if (name == "rectangular") return Window::rectangular;
    if (name == "hann") return Window::hann;
    if (name == "blackman") return Window::blackman;
    return name == "kaiser" ? Window::kaiser : Window::hamming;
}

std::optional<std::string> complaint_about_designed_taps(const FilterStage& stage) {
    const auto& taps = std::get<Fir>(stage.design).taps;
    if (std::any_of(taps.begin(), taps.end(), [](double tap) { return tap != 0.0; })) return std::nullopt;
    return "all taps are 0";
}

std::optional<Error> window_refusal(Window window, const ParameterValues& values) {
    if (window == Window::kaiser && !values.has("kaiser_beta")) {
        return refuse("kaiser_beta", "kaiser_beta is missing",
                      "give kaiser_beta: 5.65 for a stop band of -60 dB, 8.96 for -90 dB");
    }
    if (window != Window::kaiser && values.has("kaiser_beta")) {
        return refuse("kaiser_beta", "kaiser_beta belongs to the window kaiser",
                      "give window = \"kaiser\", or leave kaiser_beta out");
    }
    return std::nullopt;
}

// About 4 rate_hz / width taps make a transition that narrow (Smith, equation 16-3, from memory).
Error too_few(const WindowedSinc& design) {
    const double nyquist_hz = 0.5 * design.rate_hz;
    double width_hz = design.upper_hz - design.lower_hz;
    if (design.shape != ResponseShape::band_pass) {
        const double above_hz = nyquist_hz - design.upper_hz;
        width_hz = std::min({design.lower_hz, above_hz, is_band(design.shape) ? width_hz : above_hz});
    }
    const double enough = 2.0 * std::ceil(2.0 * design.rate_hz / width_hz) + 1.0;
    const std::string remedy =
        enough <= most_taps
            ? "give about " + number_text(enough) + " taps, 4 rate_hz over the width of the narrowest part"
            : "move the corners: " + number_text(most_taps) + " taps, the most, make no part narrower than " +
                  rounded_text(4.0 * design.rate_hz / most_taps, true) + " Hz";
    return refuse("taps",
                  std::to_string(design.taps) + " taps let next to nothing through where this " +
                      std::string(name_of(design.shape)) + " should have gain 1",
                  remedy);
}

Outcome<FilterDesign> make_windowed_sinc(const Recipe& recipe, const ParameterValues& values,
                                         const StageContext& context) {
    if (auto error = misfit_of(recipe, values)) return *error;
    const auto band = band_from(recipe, values, context.rate_hz);
    if (!band) return band.error();
    WindowedSinc design;
    design.shape = band->shape;
    design.lower_hz = band->lower_hz;
    design.upper_hz = band->upper_hz;
    design.rate_hz = context.rate_hz;
    design.taps = static_cast<int>(*values.integer(recipe, "taps"));
    design.window = window_from(*values.text(recipe, "window"));
    if (auto error = window_refusal(design.window, values)) return *error;
    if (design.window == Window::kaiser) design.kaiser_beta = *values.number(recipe, "kaiser_beta");
    if (is_type_2(design)) {
        const int taps = design.taps;
        return refuse("taps",
                      std::to_string(taps) + " taps, an even number, pass nothing at half the rate, where a " +
                          std::string(name_of(design.shape)) + " must",
                      "give " + std::to_string(taps - 1) + " or " + std::to_string(taps + 1) + " taps");
    }
    if (design.taps == 2 && (design.window == Window::hann || design.window == Window::blackman)) {
        return refuse("taps", "a window of 2 taps that is " + *values.text(recipe, "window") + " is 0 at both",
                      "give 3 taps or more");
    }
    Fir fir = designed_taps(design);
    if (fir.taps.empty()) return too_few(design);
    return FilterDesign(std::move(fir));
}

}  // namespace

FilterKind windowed_sinc_kind() {
    Recipe recipe{"windowed-sinc",
                  "An FIR filter by the window method: the ideal response, cut to a number of taps by a window.",
                  band_parameters()};
    recipe.parameters.push_back({.name = "taps",
                                 .type = ParameterType::integer,
                                 .unit = "taps",
                                 .minimum = 1.0,
                                 .maximum = most_taps,
                                 .required = true,
                                 .help = "How many; an odd number for a high-pass or band-stop."});
    recipe.parameters.push_back({.name = "window",
                                 .type = ParameterType::choice,
                                 .choices = {window_names.begin(), window_names.end()},
                                 .help = "What cuts the ideal response to length."});
    recipe.parameters.push_back({.name = "kaiser_beta",
                                 .type = ParameterType::real,
                                 .minimum = 0.0,
                                 .maximum = most_beta,
                                 .help = "Of the window kaiser: the larger, the deeper the stop band and the wider the "
                                         "transition."});
    return {std::move(recipe), make_windowed_sinc, complaint_about_designed_taps};
}

}  // namespace halflsb
