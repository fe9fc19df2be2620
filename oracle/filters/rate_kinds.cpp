// The kinds that change the sample rate: CIC and FIR, decimators and interpolators.
#include <cmath>

#include "oracle/filters/cic.hpp"
#include "oracle/filters/filter_kind.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

namespace {

constexpr double most_factor = 4096.0;
constexpr std::string_view phase_name = "phase_samples";
constexpr double most_order = 8.0;
constexpr double most_shift_bits = 62.0;
constexpr std::size_t most_taps = 65536;
// A code of a few bits times this is still exact in double precision.
constexpr double largest_gain = 0x1p52;

double largest_sum(const CicDecimator& design) { return gain_of_sums(design); }
double largest_sum(const CicInterpolator& design) { return gain_of_sums(design) / design.factor; }

template <class Cic>
std::optional<Error> gain_beyond_double(const Cic& design) {
    if (largest_sum(design) <= largest_gain) return std::nullopt;
    Cic smaller = design;
    while (smaller.order > 1 && largest_sum(smaller) > largest_gain) --smaller.order;
    Cic slower = design;
    while (slower.factor > 2 && largest_sum(slower) > largest_gain) --slower.factor;
    return refuse("order",
                  "order " + std::to_string(design.order) + ", factor " + std::to_string(design.factor) +
                      " and delay_samples " + std::to_string(design.delay_samples) + " make a gain of 2^" +
                      text_of(std::round(100.0 * std::log2(largest_sum(design))) / 100.0) +
                      ", more than the 2^52 that double precision carries",
                  "give order = " + std::to_string(smaller.order) +
                      " or less, or factor = " + std::to_string(slower.factor) + " or less");
}

std::optional<Error> phase_beyond_factor(int phase, int factor) {
    if (phase < factor) return std::nullopt;
    return refuse("phase_samples",
                  "phase_samples " + std::to_string(phase) + " is not one of the " + std::to_string(factor) +
                      " inputs of a group, which count from 0",
                  "give a number from 0 to " + std::to_string(factor - 1) + ": 0 returns with the first input, " +
                      std::to_string(factor - 1) + " with the last");
}

template <class Cic>
Outcome<FilterDesign> make_cic(const Recipe& recipe, const ParameterValues& values, const StageContext&) {
    if (auto error = misfit_of(recipe, values)) return *error;
    Cic design;
    design.order = static_cast<int>(*values.integer(recipe, "order"));
    design.factor = static_cast<int>(*values.integer(recipe, "factor"));
    design.delay_samples = static_cast<int>(*values.integer(recipe, "delay_samples"));
    if (const auto bits = values.integer(recipe, "shift_bits")) design.shift_bits = static_cast<int>(*bits);
    if constexpr (requires { design.phase_samples; }) {
        design.phase_samples = static_cast<int>(*values.integer(recipe, phase_name));
        if (auto error = phase_beyond_factor(design.phase_samples, design.factor)) return *error;
    }
    if (auto error = gain_beyond_double(design)) return *error;
    return FilterDesign(design);
}

Outcome<FilterDesign> make_decimator(const Recipe& recipe, const ParameterValues& values, const StageContext&) {
    auto taps = taps_from(values, most_taps);
    if (!taps) return taps.error();
    if (auto error = misfit_of(recipe, values)) return *error;
    const auto factor = static_cast<int>(*values.integer(recipe, "factor"));
    const auto phase = static_cast<int>(*values.integer(recipe, phase_name));
    if (auto error = phase_beyond_factor(phase, factor)) return *error;
    return FilterDesign(FirDecimator{std::move(*taps), factor, phase});
}

Outcome<FilterDesign> make_interpolator(const Recipe& recipe, const ParameterValues& values, const StageContext&) {
    auto taps = taps_from(values, most_taps);
    if (!taps) return taps.error();
    if (auto error = misfit_of(recipe, values)) return *error;
    const auto factor = static_cast<std::size_t>(*values.integer(recipe, "factor"));
    if (const std::size_t over = taps->size() % factor; over != 0) {
        const std::size_t missing = factor - over;
        return refuse(values.has("taps") ? "taps" : "taps_file",
                      text_of(taps->size()) + " taps are no multiple of the factor, " + text_of(factor) +
                          ": the phases of the filter would differ in length",
                      "put " + text_of(missing) + (missing == 1 ? " zero" : " zeros") + " behind the last tap");
    }
    return FilterDesign(FirInterpolator{std::move(*taps), static_cast<int>(factor)});
}

Parameter factor_parameter(std::string_view help) {
    return {.name = "factor",
            .type = ParameterType::integer,
            .minimum = 2.0,
            .maximum = most_factor,
            .required = true,
            .help = help};
}

std::vector<Parameter> cic_parameters(std::string_view factor_help, std::string_view shift_help) {
    return {{.name = "order",
             .type = ParameterType::integer,
             .minimum = 1.0,
             .maximum = most_order,
             .required = true,
             .help = "How many pairs of integrator and comb there are."},
            factor_parameter(factor_help),
            {.name = "delay_samples",
             .type = ParameterType::integer,
             .unit = "samples",
             .minimum = 1.0,
             .maximum = 2.0,
             .default_value = 1.0,
             .help = "The differential delay M of the combs, in samples of the lower rate."},
            {.name = "shift_bits",
             .type = ParameterType::integer,
             .unit = "bits",
             .minimum = 0.0,
             .maximum = most_shift_bits,
             .help = shift_help}};
}

std::vector<Parameter> tap_parameters(std::string_view taps_help, std::string_view factor_help) {
    return {coefficients_parameter("taps", ParameterType::reals, taps_help),
            coefficients_parameter("taps_file", ParameterType::file,
                                   "Instead of taps: a file with one tap a line, the one of the newest sample first."),
            factor_parameter(factor_help)};
}

Recipe with_phase(Recipe recipe) {
    recipe.parameters.push_back(
        {.name = phase_name,
         .type = ParameterType::integer,
         .unit = "samples",
         .minimum = 0.0,
         .maximum = most_factor - 1.0,
         .default_value = 0.0,
         .help = "Which input of each group of factor the output is taken at, counted from 0: 0 returns with the "
                 "first, factor - 1 waits for the last, as code that counts to factor does."});
    return recipe;
}

constexpr std::string_view drops = "One output for as many inputs; phase_samples says with which of them.";
constexpr std::string_view fills = "As many outputs for one input.";

}  // namespace

FilterKind cic_decimator_kind() {
    return {with_phase({"cic-decimator",
                        "A cascade of integrators, a drop in rate, and combs: the moving sum of factor x "
                        "delay_samples inputs, order times over.",
                        cic_parameters(drops,
                                       "The firmware shifts the result right by this many bits; left out, the gain "
                                       "(factor delay_samples)^order is divided out.")}),
            make_cic<CicDecimator>, nullptr};
}

FilterKind cic_interpolator_kind() {
    return {{"cic-interpolator",
             "Combs, a rise in rate with zeros, and integrators: the moving sum of factor x delay_samples outputs, "
             "order times over.",
             cic_parameters(fills,
                            "The firmware shifts the result right by this many bits; left out, the gain factor^(order "
                            "- 1) delay_samples^order is divided out.")},
            make_cic<CicInterpolator>,
            nullptr};
}

FilterKind fir_decimator_kind() {
    return {with_phase({"fir-decimator",
                        "A finite impulse response of which each factor-th output is kept: y[m] = taps[0] x[i] + "
                        "taps[1] x[i - 1] + ..., i = m factor + phase_samples.",
                        tap_parameters("The taps, 1 .. 65536 of them, the one of the newest sample first; one tap of 1 "
                                       "keeps each factor-th input.",
                                       drops)}),
            make_decimator, complaint_about_taps};
}

FilterKind fir_interpolator_kind() {
    return {{"fir-interpolator",
             "Zeros behind each input, then a finite impulse response at the higher rate; the taps are used as they "
             "are, so the gain at zero frequency is their sum over factor.",
             tap_parameters("The taps at the higher rate, up to 65536, a multiple of factor, the one of the newest "
                            "sample first.",
                            fills)},
            make_interpolator,
            complaint_about_taps};
}

}  // namespace halflsb
