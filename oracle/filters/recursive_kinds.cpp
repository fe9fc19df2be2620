// The kinds butterworth and chebyshev.
#include <optional>

#include "oracle/filters/band_words.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

namespace {

constexpr double most_order = 12.0;
constexpr double least_ripple_db = 0.001;
constexpr double most_ripple_db = 30.0;

bool is_held(const RecursiveDesign& design) { return is_held(designed_sections(design)); }

std::string problem_of(const RecursiveDesign& design, std::string_view what) {
    return std::string(what) + not_held(designed_sections(design), design.rate_hz);
}

// A single corner does again on its way to a quarter of the rate.
Error corner_refusal(const RecursiveDesign& design) {
    const double middle_hz = 0.25 * design.rate_hz;
    const auto does = [&](double corner_hz) {
        RecursiveDesign moved = design;
        moved.lower_hz = moved.upper_hz = corner_hz;
        return is_held(moved);
    };
    const std::string problem = problem_of(design, "a corner of " + number_text(design.lower_hz) + " Hz");
    if (!does(middle_hz)) return refuse("order", problem, "give a lower order");
    if (design.lower_hz < middle_hz) {
        return refuse("corner_hz", problem,
                      "give " + number_text(first_that_does(design.lower_hz, middle_hz, does)) + " Hz or more");
    }
    // From above, in distances to half the rate.
    const double half_hz = 0.5 * design.rate_hz;
    const double distance_hz = first_that_does(half_hz - design.lower_hz, half_hz - middle_hz,
                                               [&](double distance) { return does(half_hz - distance); });
    return refuse("corner_hz", problem, "give " + number_text(half_hz - distance_hz) + " Hz or less");
}

constexpr double step = 1.05;

// One end or both of the band moved, by a factor; nullopt where no factor does before the band ends at 0, at half the
// rate, or in itself.
template <class Move>
std::optional<RecursiveDesign> first_moved(const RecursiveDesign& design, double per_step, Move move) {
    const auto moved = [&](double factor) {
        RecursiveDesign other = design;
        move(other, factor);
        return other;
    };
    const auto is_possible = [](const RecursiveDesign& d) {
        return d.lower_hz >= least_design_hz && d.lower_hz < d.upper_hz && d.upper_hz < 0.5 * d.rate_hz;
    };
    for (double factor = per_step; is_possible(moved(factor)); factor *= per_step) {
        if (is_held(moved(factor))) return moved(factor);
    }
    return std::nullopt;
}

Error band_refusal(const RecursiveDesign& design) {
    const std::string problem = problem_of(
        design, "a band from " + number_text(design.lower_hz) + " Hz to " + number_text(design.upper_hz) + " Hz");
    const auto wider_up = [](RecursiveDesign& d, double factor) {
        d.upper_hz = d.lower_hz + factor * (d.upper_hz - d.lower_hz);
    };
    const auto wider_down = [](RecursiveDesign& d, double factor) {
        d.lower_hz = d.upper_hz - factor * (d.upper_hz - d.lower_hz);
    };
    const auto lower = [](RecursiveDesign& d, double factor) { d.lower_hz *= factor; };
    const auto both = [](RecursiveDesign& d, double factor) {
        d.lower_hz *= factor;
        d.upper_hz *= factor;
    };
    if (const auto found = first_moved(design, step, wider_up)) {
        return refuse("to_hz", problem, "give " + rounded_text(found->upper_hz, true) + " Hz or more");
    }
    if (const auto found = first_moved(design, step, wider_down)) {
        return refuse("from_hz", problem, "give " + rounded_text(found->lower_hz, false) + " Hz or less");
    }
    if (const auto found = first_moved(design, step, lower)) {
        return refuse("from_hz", problem, "give " + rounded_text(found->lower_hz, true) + " Hz or more");
    }
    for (RecursiveDesign less = design; --less.order > 0;) {
        if (is_held(less)) return refuse("order", problem, "give " + std::to_string(less.order) + " or less");
    }
    if (const auto found = first_moved(design, step, both)) {
        return refuse("from_hz", problem,
                      "give " + rounded_text(found->lower_hz, true) +
                          " Hz and to_hz = " + rounded_text(found->upper_hz, true) + " or more");
    }
    return refuse("from_hz", problem, "give corners farther from 0 and from half the sample rate");
}

Outcome<FilterDesign> make_recursive(const Recipe& recipe, const ParameterValues& values, const StageContext& context) {
    if (auto error = misfit_of(recipe, values)) return *error;
    const auto band = band_from(recipe, values, context.rate_hz);
    if (!band) return band.error();
    RecursiveDesign design;
    design.shape = band->shape;
    design.order = static_cast<int>(*values.integer(recipe, "order"));
    if (find_parameter(recipe, "ripple_db") != nullptr) design.ripple_db = *values.number(recipe, "ripple_db");
    design.lower_hz = band->lower_hz;
    design.upper_hz = band->upper_hz;
    design.rate_hz = context.rate_hz;
    if (!is_held(design)) return is_band(design.shape) ? band_refusal(design) : corner_refusal(design);
    return FilterDesign(BiquadCascade{designed_sections(design)});
}

Parameter order_parameter() {
    return {.name = "order",
            .type = ParameterType::integer,
            .minimum = 1.0,
            .maximum = most_order,
            .required = true,
            .help = "Of the low-pass that it is made from; a band-pass or band-stop has twice as many poles."};
}

}  // namespace

FilterKind butterworth_kind() {
    Recipe recipe{"butterworth",
                  "A Butterworth filter, maximally flat, -3.01 dB at its corners: bilinear transform with pre-warped "
                  "corners, in second-order sections.",
                  band_parameters()};
    recipe.parameters.push_back(order_parameter());
    return {std::move(recipe), make_recursive, complaint_about_sections};
}

FilterKind chebyshev_kind() {
    Recipe recipe{
        "chebyshev",
        "A Chebyshev filter of type 1, -ripple_db at its corners: bilinear transform with pre-warped corners, "
        "in second-order sections.",
        band_parameters()};
    recipe.parameters.push_back(order_parameter());
    recipe.parameters.push_back({.name = "ripple_db",
                                 .type = ParameterType::real,
                                 .unit = "dB",
                                 .minimum = least_ripple_db,
                                 .maximum = most_ripple_db,
                                 .required = true,
                                 .help = "How far the gain swings below its largest, 0 dB, in the pass band."});
    return {std::move(recipe), make_recursive, complaint_about_sections};
}

}  // namespace halflsb
