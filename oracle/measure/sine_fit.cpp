#include "oracle/measure/sine_fit.hpp"

#include <array>
#include <cmath>
#include <numbers>
#include <vector>

#include "oracle/measure/sine_columns.hpp"
#include "oracle/measure/sums.hpp"

namespace halflsb {

namespace {

constexpr double pi = std::numbers::pi;
constexpr int most_steps = 30;
constexpr double smallest_turn_radians = 1e-10;

// a cos + b sin + offset, time from the middle of the record.
struct Middle {
    double f = 0.0, a = 0.0, b = 0.0, offset = 0.0;
};

ToneFault fault_of(double f, std::span<const double> samples) {
    if (samples.size() < sine_fit_least_samples) return ToneFault::too_short;
    for (const double sample : samples) {
        if (!std::isfinite(sample)) return ToneFault::not_finite;
    }
    // One cycle exactly must not fail for the rounding of the frequency.
    const double least = (1.0 - 1e-9) / static_cast<double>(samples.size());
    return f >= least && 0.5 - f >= least ? ToneFault::none : ToneFault::near_an_end;
}

NormalEquations three_columns(double f, std::size_t samples) {
    const double length = static_cast<double>(samples), twice = sum_of_turns(2.0 * f, samples),
                 mean = sum_of_turns(f, samples);
    return NormalEquations({0.5 * (length + twice), 0.0, mean, 0.0, 0.5 * (length - twice), 0.0, mean, 0.0, length}, 3);
}

void solve_three(Middle& sine, const NormalEquations& equations, std::span<const double> samples) {
    sine.a = sine.b = sine.offset = 0.0;
    for (int pass = 0; pass < 2; ++pass) {
        CompensatedSum cosines, sines, ones;
        for_each_turn(sine.f, samples.size(), [&](std::size_t n, double cosine, double sine_n) {
            const double rest = samples[n] - (sine.a * cosine + sine.b * sine_n + sine.offset);
            cosines.add(rest * cosine);
            sines.add(rest * sine_n);
            ones.add(rest);
        });
        const auto step = equations.solve({cosines.value(), sines.value(), ones.value()});
        sine.a += step[0], sine.b += step[1], sine.offset += step[2];
    }
}

// The four columns' inner products, and those with the residual of the sine.
struct FourColumns {
    std::vector<double> products = std::vector<double>(16);
    std::vector<double> right = std::vector<double>(4);
};

FourColumns four_columns(const Middle& sine, std::span<const double> samples) {
    std::array<CompensatedSum, 16> products;
    std::array<CompensatedSum, 4> right;
    const double middle = middle_of(samples.size());
    for_each_turn(sine.f, samples.size(), [&](std::size_t n, double cosine, double sine_n) {
        const double time = static_cast<double>(n) - middle;
        const std::array<double, 4> column{cosine, sine_n, 1.0, 2.0 * pi * time * (sine.b * cosine - sine.a * sine_n)};
        const double rest = samples[n] - (sine.a * cosine + sine.b * sine_n + sine.offset);
        for (std::size_t i = 0; i < 4; ++i) {
            right[i].add(rest * column[i]);
            for (std::size_t j = 0; j <= i; ++j) products[4 * i + j].add(column[i] * column[j]);
        }
    });
    FourColumns sums;
    for (std::size_t i = 0; i < 4; ++i) {
        sums.right[i] = right[i].value();
        for (std::size_t j = 0; j <= i; ++j) {
            sums.products[4 * i + j] = sums.products[4 * j + i] = products[4 * i + j].value();
        }
    }
    return sums;
}

double square_sum_of_residual(const Middle& sine, std::span<const double> samples) {
    CompensatedSum squares;
    for_each_turn(sine.f, samples.size(), [&](std::size_t n, double cosine, double sine_n) {
        const double rest = samples[n] - (sine.a * cosine + sine.b * sine_n + sine.offset);
        squares.add(rest * rest);
    });
    return squares.value();
}

// sqrt(s^2 g' M^-1 g): the uncertainty of a figure with this gradient.
double uncertainty(const NormalEquations& equations, const std::vector<double>& gradient, double variance) {
    const auto solved = equations.solve(gradient);
    double sum = 0.0;
    for (std::size_t i = 0; i < gradient.size(); ++i) sum += gradient[i] * solved[i];
    return std::sqrt(variance * std::max(sum, 0.0));
}

SineFit fit_of(const Middle& sine, const NormalEquations& equations, std::span<const double> samples, int parameters) {
    const double length = static_cast<double>(samples.size()), middle = middle_of(samples.size());
    const double squares = square_sum_of_residual(sine, samples), variance = squares / (length - parameters);
    const double size = std::hypot(sine.a, sine.b);
    std::vector<double> by_amplitude(static_cast<std::size_t>(parameters), 0.0), by_phase = by_amplitude,
                                                                                 by_offset = by_amplitude;
    by_offset[2] = 1.0;
    SineFit fit;
    fit.samples = samples.size();
    fit.parameters = parameters;
    fit.rms_residual = std::sqrt(squares / length);
    fit.cycles_per_sample.value = sine.f;
    fit.offset = {sine.offset, uncertainty(equations, by_offset, variance)};
    if (parameters == 4) {
        by_phase[3] = -2.0 * pi * middle;
        fit.cycles_per_sample.standard_uncertainty = uncertainty(equations, {0.0, 0.0, 0.0, 1.0}, variance);
    }
    if (size == 0.0) {  // nothing at all: the phase is anything
        by_amplitude[0] = 1.0;
        fit.amplitude = {0.0, uncertainty(equations, by_amplitude, variance)};
        fit.phase_radians = {0.0, pi / std::sqrt(3.0)};
        return fit;
    }
    by_amplitude[0] = sine.a / size, by_amplitude[1] = sine.b / size;
    by_phase[0] = sine.b / (size * size), by_phase[1] = -sine.a / (size * size);
    fit.amplitude = {size, uncertainty(equations, by_amplitude, variance)};
    const double turns = std::atan2(-sine.b, sine.a) / (2.0 * pi) - turns_modulo_1(sine.f, middle);
    fit.phase_radians = {2.0 * pi * std::remainder(turns, 1.0), uncertainty(equations, by_phase, variance)};
    return fit;
}

}  // namespace

std::string_view reason_of(ToneFault fault) {
    switch (fault) {
        case ToneFault::none:
            return "";
        case ToneFault::too_short:
            return "the record is too short";
        case ToneFault::too_long:
            return "the record is too long";
        case ToneFault::not_finite:
            return "a sample is not a finite number";
        case ToneFault::near_an_end:
            return "the frequency is within one cycle a record of 0 or of half the rate";
        case ToneFault::no_tone:
            return "no tone stands out at the frequency";
        case ToneFault::ran_away:
            return "the fitted frequency ran away from its start";
        case ToneFault::not_converged:
            return "the fit of the frequency did not settle in 30 steps";
        case ToneFault::not_determined:
            return "the components cannot be told apart in this record";
    }
    return "";
}

SineFitAnswer fit_sine_at(double cycles_per_sample, std::span<const double> samples) {
    const ToneFault fault = fault_of(cycles_per_sample, samples);
    if (fault != ToneFault::none) return {std::nullopt, fault};
    const auto equations = three_columns(cycles_per_sample, samples.size());
    if (!equations.usable()) return {std::nullopt, ToneFault::not_determined};
    Middle sine{cycles_per_sample};
    solve_three(sine, equations, samples);
    return {fit_of(sine, equations, samples, 3), ToneFault::none};
}

SineFitAnswer fit_sine_near(double start_cycles_per_sample, std::span<const double> samples) {
    const ToneFault fault = fault_of(start_cycles_per_sample, samples);
    if (fault != ToneFault::none) return {std::nullopt, fault};
    const double length = static_cast<double>(samples.size());
    Middle sine{start_cycles_per_sample};
    const auto start = three_columns(sine.f, samples.size());
    if (!start.usable()) return {std::nullopt, ToneFault::not_determined};
    solve_three(sine, start, samples);
    for (int step = 1; step <= most_steps; ++step) {
        if (sine.a == 0.0 && sine.b == 0.0) return {std::nullopt, ToneFault::no_tone};
        auto sums = four_columns(sine, samples);
        const NormalEquations equations(std::move(sums.products), 4);
        if (!equations.usable()) return {std::nullopt, ToneFault::not_determined};
        const auto change = equations.solve(std::move(sums.right));
        if (!(std::abs(sine.f + change[3] - start_cycles_per_sample) * length <= 1.0)) {
            return {std::nullopt, ToneFault::ran_away};
        }
        sine.a += change[0], sine.b += change[1], sine.offset += change[2], sine.f += change[3];
        if (!(2.0 * pi * std::abs(change[3]) * length < smallest_turn_radians)) continue;
        const ToneFault end = fault_of(sine.f, samples);
        if (end != ToneFault::none) return {std::nullopt, end};
        solve_three(sine, three_columns(sine.f, samples.size()), samples);
        SineFit fit = fit_of(sine, equations, samples, 4);
        fit.steps = step;
        return {fit, ToneFault::none};
    }
    return {std::nullopt, ToneFault::not_converged};
}

void subtract_sine(const SineFit& fit, std::span<const double> samples, std::span<double> residual) {
    const auto turn = unit_of_turns(fit.phase_radians.value / (2.0 * pi) +
                                    turns_modulo_1(fit.cycles_per_sample.value, middle_of(samples.size())));
    const double a = fit.amplitude.value * turn.real(), b = -fit.amplitude.value * turn.imag();
    for_each_turn(fit.cycles_per_sample.value, samples.size(), [&](std::size_t n, double cosine, double sine) {
        residual[n] = samples[n] - (a * cosine + b * sine + fit.offset.value);
    });
}

}  // namespace halflsb
