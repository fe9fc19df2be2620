#include "oracle/filters/equaliser.hpp"

#include <algorithm>
#include <cmath>

#include "oracle/filters/design_math.hpp"

namespace halflsb {

namespace {

double alpha_of(const EqualiserDesign& design, double amplitude, double sine) {
    constexpr double half_log_of_two = 0.34657359027997264;
    switch (design.width_is) {
        case EqualiserWidth::q:
            return sine / (2.0 * design.width);
        case EqualiserWidth::bandwidth_octaves: {
            const double w0 = 2.0 * pi_in_designs * design.frequency_hz / design.rate_hz;
            return sine * hyperbolic_sine(half_log_of_two * design.width * w0 / sine);
        }
        default:
            break;
    }
    const double square = (amplitude + 1.0 / amplitude) * (1.0 / design.width - 1.0) + 2.0;
    return 0.5 * sine * std::sqrt(std::max(square, 0.0));
}

}  // namespace

double steepest_slope(double gain_db) {
    const double amplitude = ratio_of_db(0.5 * gain_db);
    return 1.0 / (1.0 - 2.0 / (amplitude + 1.0 / amplitude));
}

BiquadSection designed_section(const EqualiserDesign& design) {
    const auto [sine, cosine] = sine_cosine(design.frequency_hz, design.rate_hz);
    const auto [half_sine, half_cosine] = sine_cosine(design.frequency_hz, 2.0 * design.rate_hz);
    const double above = 2.0 * half_sine * half_sine;      // 1 - cos w0
    const double below = 2.0 * half_cosine * half_cosine;  // 1 + cos w0
    const double a = ratio_of_db(0.5 * design.gain_db);
    const double alpha = alpha_of(design, a, sine), root = 2.0 * std::sqrt(a) * alpha;
    double b0 = 0.0, b1 = 0.0, b2 = 0.0, a0 = 1.0 + alpha, a1 = -2.0 * cosine, a2 = 1.0 - alpha;
    switch (design.type) {
        case EqualiserType::low_pass:
            b0 = b2 = 0.5 * above;
            b1 = above;
            break;
        case EqualiserType::high_pass:
            b0 = b2 = 0.5 * below;
            b1 = -below;
            break;
        case EqualiserType::band_pass:
            b0 = alpha;
            b2 = -alpha;
            break;
        case EqualiserType::band_pass_skirt:
            // q alpha is sin(w0) / 2, whichever way alpha was given.
            b0 = 0.5 * sine;
            b2 = -0.5 * sine;
            break;
        case EqualiserType::all_pass:
            b0 = a2;
            b1 = a1;
            b2 = a0;
            break;
        case EqualiserType::peaking:
            b0 = 1.0 + alpha * a;
            b1 = a1;
            b2 = 1.0 - alpha * a;
            a0 = 1.0 + alpha / a;
            a2 = 1.0 - alpha / a;
            break;
        case EqualiserType::low_shelf:
            // (A + 1) - (A - 1) cos w0 as A (1 - cos w0) + (1 + cos w0), and so on.
            b0 = a * ((a * above + below) + root);
            b1 = 2.0 * a * (a * above - below);
            b2 = a * ((a * above + below) - root);
            a0 = (a * below + above) + root;
            a1 = -2.0 * (a * below - above);
            a2 = (a * below + above) - root;
            break;
        case EqualiserType::high_shelf:
            b0 = a * ((a * below + above) + root);
            b1 = -2.0 * a * (a * below - above);
            b2 = a * ((a * below + above) - root);
            a0 = (a * above + below) + root;
            a1 = 2.0 * (a * above - below);
            a2 = (a * above + below) - root;
            break;
    }
    return {b0 / a0, b1 / a0, b2 / a0, a1 / a0, a2 / a0};
}

}  // namespace halflsb
