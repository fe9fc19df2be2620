#include "oracle/filters/closed_forms.hpp"

#include <cmath>
#include <limits>

#include "oracle/filters/exact_sums.hpp"

namespace halflsb {

namespace {

constexpr double pi = 3.14159265358979323846;
constexpr double no_delay = std::numeric_limits<double>::quiet_NaN();

// Sine and cosine of half the angular frequency; 0.5 - f is exact from 0.25 on.
double half_sine(double f) { return f < 0.25 ? std::sin(pi * f) : std::cos(pi * (0.5 - f)); }
double half_cosine(double f) { return f < 0.25 ? std::cos(pi * f) : std::sin(pi * (0.5 - f)); }

/// p0 + p1 z^-1 + p2 z^-2, evaluated so that nothing cancels near zero frequency and near half the rate.
struct Polynomial {
    double p0 = 1.0, p1 = 0.0, p2 = 0.0;

    double sum() const { return sum_of_three(p0, p1, p2); }
    double difference() const { return sum_of_three(p0, -p1, p2); }
    // C(w) = e^(j w) P = (p0 + p2) cos w + p1 + j (p0 - p2) sin w.
    double real(double f) const {
        const double s = half_sine(f), c = half_cosine(f);
        return f < 0.25 ? sum() - 2.0 * (p0 + p2) * s * s : 2.0 * (p0 + p2) * c * c - difference();
    }
    double imaginary(double f) const { return 2.0 * (p0 - p2) * half_sine(f) * half_cosine(f); }

    double delay(double f) const {
        // Two zeros on the circle, or two that mirror each other in it.
        if (p0 == p2) return 1.0;
        const double re = real(f), im = imaginary(f), square = re * re + im * im;
        // A single zero, at z = 1 or z = -1, right here: (1 -+ z^-1)(p0 -+ p2 z^-1).
        if (!(square > 0.0)) return 0.5 - p2 / (p0 - p2);
        const double s = half_sine(f), c = half_cosine(f);
        const double slope = f < 0.25 ? sum() - 2.0 * p1 * s * s : difference() + 2.0 * p1 * c * c;
        return 1.0 - (p0 - p2) * slope / square;
    }

    // Where C is 0, its angle beside: behind zero frequency, before half the rate.
    double turn_beside_zero(double f) const {
        if (p0 != p2) return std::copysign(0.5 * pi, p0 - p2);
        return (p0 > 0.0) == (f < 0.25) ? pi : 0.0;
    }

    // C stays on one side of the real axis, so there are no wraps; or on it, where a zero turns the sign.
    double phase(double f) const {
        const double re = real(f), im = p0 == p2 ? 0.0 : imaginary(f);
        return -2.0 * pi * f + (re == 0.0 && im == 0.0 ? turn_beside_zero(f) : std::atan2(im, re));
    }
};

Polynomial numerator(const BiquadSection& s) { return {s.b0, s.b1, s.b2}; }
Polynomial denominator(const BiquadSection& s) { return {1.0, s.a1, s.a2}; }

/// p0 + p1 e^(-j t) at t = 2 pi f D.
struct TwoTaps {
    double p0 = 1.0, p1 = 0.0, delay_samples = 1.0;

    double turn(double f) const { return 2.0 * pi * std::remainder(f * delay_samples, 1.0); }
    double delay(double f) const {
        if (std::fabs(p0) == std::fabs(p1)) return 0.5 * delay_samples;
        const double t = turn(f), re = p0 + p1 * std::cos(t), im = p1 * std::sin(t);
        return delay_samples * p1 * (p1 + p0 * std::cos(t)) / (re * re + im * im);
    }
    // The larger tap leads: around it the sum never turns by a quarter and more.
    double phase(double f) const {
        const double t = turn(f), whole = 2.0 * pi * f * delay_samples;
        if (std::fabs(p0) > std::fabs(p1)) return sign_of(p0) + std::atan(-p1 * std::sin(t) / (p0 + p1 * std::cos(t)));
        if (std::fabs(p0) < std::fabs(p1)) {
            return sign_of(p1) - whole + std::atan(p0 * std::sin(t) / (p1 + p0 * std::cos(t)));
        }
        // 2 p0 cos(t / 2) e^(-j t / 2), or 2 j p0 sin(t / 2) e^(-j t / 2): half a turn more at each zero.
        const double turns = f * delay_samples;
        if (p0 == p1) return sign_of(p0) - 0.5 * whole + pi * std::floor(turns + 0.5);
        return sign_of(p0) + 0.5 * pi - 0.5 * whole + pi * std::floor(turns);
    }
    static double sign_of(double p) { return p < 0.0 ? pi : 0.0; }
};

enum class Symmetry { none, even, odd };
Symmetry symmetry_of(const std::vector<double>& taps) {
    bool even = true, odd = true;
    for (std::size_t k = 0; k < taps.size(); ++k) {
        const double mirrored = taps[taps.size() - 1 - k];
        even = even && taps[k] == mirrored;
        odd = odd && taps[k] == -mirrored;
    }
    return even ? Symmetry::even : odd ? Symmetry::odd : Symmetry::none;
}

double delay_of(const Fir& fir, double f) {
    const double last = static_cast<double>(fir.taps.size()) - 1.0;
    if (symmetry_of(fir.taps) != Symmetry::none) return 0.5 * last;
    // Counted from the middle: less is lost where the sums cancel.
    Fir weighted = fir;
    for (std::size_t k = 0; k < fir.taps.size(); ++k) weighted.taps[k] *= static_cast<double>(k) - 0.5 * last;
    const auto sum = response_at({FilterStage{fir, std::nullopt}}, f);
    const auto moment = response_at({FilterStage{weighted, std::nullopt}}, f);
    const double square = std::norm(sum);
    return square > 0.0 ? 0.5 * last + (moment.real() * sum.real() + moment.imag() * sum.imag()) / square : no_delay;
}

double delay_of(const FilterDesign& design, double f) {
    if (const auto* average = std::get_if<MovingAverage>(&design)) return 0.5 * (average->points - 1.0);
    if (const auto* fir = std::get_if<Fir>(&design)) return delay_of(*fir, f);
    if (const auto* comb = std::get_if<Comb>(&design)) {
        const double delay = comb->delay_samples;
        return TwoTaps{comb->direct, comb->forward, delay}.delay(f) - TwoTaps{1.0, comb->feedback, delay}.delay(f);
    }
    if (const auto* recursion = std::get_if<Recursion>(&design)) {
        return delay_of(Fir{recursion->b}, f) - delay_of(Fir{recursion->a}, f);
    }
    const auto* cascade = std::get_if<BiquadCascade>(&design);
    if (cascade == nullptr) return no_delay;
    double sum = 0.0;
    for (const BiquadSection& s : cascade->sections) sum += numerator(s).delay(f) - denominator(s).delay(f);
    return sum;
}

struct PhasePoint {
    double f = 0.0, wrapped = 0.0, delay = 0.0;
};

PhasePoint phase_point(const Fir& fir, double f) {
    return {f, std::arg(response_at({FilterStage{fir, std::nullopt}}, f)), delay_of(fir, f)};
}

// The change of phase between two points. Where the delay at both does not explain it, a zero near the circle lies
// between, and the stretch is halved.
double phase_step(const Fir& fir, const PhasePoint& from, const PhasePoint& to, int halvings) {
    constexpr double trusted = 0.3;  // radians; a zero between leaves out half a turn
    const double expected = -pi * (to.f - from.f) * (from.delay + to.delay);
    const double near = std::remainder(to.wrapped - from.wrapped, 2.0 * pi);
    const double step = near + 2.0 * pi * std::round((expected - near) / (2.0 * pi));
    if (std::fabs(step - expected) < trusted && std::fabs(expected) < pi) return step;
    if (halvings == 0) return near;
    const PhasePoint middle = phase_point(fir, 0.5 * (from.f + to.f));
    return phase_step(fir, from, middle, halvings - 1) + phase_step(fir, middle, to, halvings - 1);
}

std::vector<double> followed_phase(const Fir& fir, std::span<const double> frequencies) {
    constexpr int most_halvings = 30;
    std::vector<double> phases;
    PhasePoint before;
    for (const double f : frequencies) {
        const PhasePoint here = phase_point(fir, f);
        phases.push_back(phases.empty() ? here.wrapped : phases.back() + phase_step(fir, before, here, most_halvings));
        before = here;
    }
    return phases;
}

// A symmetric FIR is e^(-j w (N - 1) / 2) times a real amplitude, an antisymmetric one times j and a real one; the sign
// of the amplitude turns at each zero on the circle, which the grid must see.
std::vector<double> symmetric_phase(const Fir& fir, std::span<const double> frequencies, bool is_odd) {
    const double middle = 0.5 * (static_cast<double>(fir.taps.size()) - 1.0);
    std::vector<double> phases;
    double jumps = 0.0;
    bool was_negative = false;
    for (const double f : frequencies) {
        double amplitude = 0.0;
        for (std::size_t k = 0; k < fir.taps.size(); ++k) {
            const double turn = 2.0 * pi * std::remainder(f * (middle - static_cast<double>(k)), 1.0);
            amplitude += fir.taps[k] * (is_odd ? std::sin(turn) : std::cos(turn));
        }
        const bool is_negative = amplitude < 0.0;
        if (is_negative != was_negative) jumps += pi;
        was_negative = is_negative;
        phases.push_back(jumps + (is_odd ? 0.5 * pi : 0.0) - 2.0 * pi * f * middle);
    }
    return phases;
}

std::vector<double> phases_of(const Fir& fir, std::span<const double> frequencies) {
    const Symmetry symmetry = symmetry_of(fir.taps);
    if (symmetry == Symmetry::none) return followed_phase(fir, frequencies);
    return symmetric_phase(fir, frequencies, symmetry == Symmetry::odd);
}

std::vector<double> phases_of(const FilterDesign& design, std::span<const double> frequencies) {
    if (const auto* fir = std::get_if<Fir>(&design)) return phases_of(*fir, frequencies);
    if (const auto* recursion = std::get_if<Recursion>(&design)) {
        std::vector<double> phases = phases_of(Fir{recursion->b}, frequencies);
        const std::vector<double> below = phases_of(Fir{recursion->a}, frequencies);
        for (std::size_t i = 0; i < phases.size(); ++i) phases[i] -= below[i];
        return phases;
    }
    std::vector<double> phases;
    for (const double f : frequencies) {
        double phase = no_delay;
        if (const auto* average = std::get_if<MovingAverage>(&design)) {
            // Of sin(pi f M) / sin(pi f) the sign turns at each k / M.
            phase = pi * (std::floor(f * average->points) - f * (average->points - 1.0));
        } else if (const auto* comb = std::get_if<Comb>(&design)) {
            const double delay = comb->delay_samples;
            phase = TwoTaps{comb->direct, comb->forward, delay}.phase(f) - TwoTaps{1.0, comb->feedback, delay}.phase(f);
        } else if (const auto* cascade = std::get_if<BiquadCascade>(&design)) {
            phase = 0.0;
            for (const BiquadSection& s : cascade->sections) phase += numerator(s).phase(f) - denominator(s).phase(f);
        }
        phases.push_back(phase);
    }
    return phases;
}

// p0 z^2 + p1 z + p2 = 0, without the roots at 0.
std::vector<std::complex<double>> roots(double p0, double p1, double p2) {
    if (p0 == 0.0) {
        if (p1 == 0.0 || p2 == 0.0) return {};
        return {-p2 / p1};
    }
    if (p2 == 0.0) return p1 == 0.0 ? std::vector<std::complex<double>>{} : std::vector<std::complex<double>>{-p1 / p0};
    const double discriminant = difference_of_product(p1 * p1, 4.0 * p0, p2);
    if (discriminant < 0.0) {
        const std::complex<double> root(-0.5 * p1 / p0, 0.5 * std::sqrt(-discriminant) / std::fabs(p0));
        return {root, std::conj(root)};
    }
    const double larger = -0.5 * (p1 + std::copysign(std::sqrt(discriminant), p1));
    return {larger / p0, p2 / larger};
}

}  // namespace

double phase_at(const FilterChain& chain, double cycles_per_sample) {
    return std::arg(response_at(chain, cycles_per_sample));
}

std::vector<double> unwrapped_phase(const FilterChain& chain, std::span<const double> frequencies) {
    std::vector<double> sum(frequencies.size(), 0.0);
    for (const FilterStage& stage : chain) {
        const std::vector<double> own = phases_of(stage.design, frequencies);
        for (std::size_t i = 0; i < sum.size(); ++i) sum[i] += own[i];
    }
    return sum;
}

double group_delay_samples(const FilterChain& chain, double cycles_per_sample) {
    double sum = 0.0;
    for (const FilterStage& stage : chain) sum += delay_of(stage.design, cycles_per_sample);
    return sum;
}

std::vector<double> step_response(const FilterChain& chain, std::size_t length) {
    std::vector<double> response(length, 1.0);
    make_filter(chain)->process(response, response);
    return response;
}

std::vector<std::complex<double>> poles_of(const BiquadSection& section) { return roots(1.0, section.a1, section.a2); }

std::vector<std::complex<double>> zeros_of(const BiquadSection& section) {
    return roots(section.b0, section.b1, section.b2);
}

}  // namespace halflsb
