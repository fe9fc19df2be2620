// A sine whose frequency sweeps from from_hz to to_hz, linearly or logarithmically.
//
// With N samples from at_samples to the end of the stimulus, rate r and own index n:
//   linear       phase(n) = f0/r n + (f1 - f0)/r n^2 / (2 N)
//   logarithmic  phase(n) = f0/r N / ln(f1/f0) ((f1/f0)^(n/N) - 1)
// in turns. The instantaneous frequency, r times the derivative, is f0 at n = 0 and f1 at n = N, one
// sample after the last.
#include <algorithm>

#include "stimuli/exact_math.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

Uint128 as_wide(std::int64_t not_negative) { return static_cast<Uint128>(static_cast<std::uint64_t>(not_negative)); }

/// Each term is good to 2^-127 of its size, at most N/4 turns: below 2^-94 turns for 1e10 samples.
class LinearPhase {
public:
    LinearPhase(double from_hz, double to_hz, double rate_hz, std::int64_t sweep_samples)
        : start_(wide(from_hz) / wide(rate_hz)) {
        const Wide two_lengths = wide_scaled(as_wide(sweep_samples), 1);
        minus_ = start_ / two_lengths;
        plus_ = wide(to_hz) / wide(rate_hz) / two_lengths;
    }

    // The two halves of the quadratic term stay apart, because to_hz - from_hz may not be exact.
    TurnFraction operator()(std::int64_t own_index) const {
        const Uint128 n = as_wide(own_index);
        return phase_after(start_, n) + phase_after(plus_, n * n) - phase_after(minus_, n * n);
    }

private:
    Wide start_, plus_, minus_;
};

/// With C = f0/r N / |ln(f1/f0)| turns and the larger frequency F times the smaller, the error is below
/// C F 2^-121 turns plus that of the logarithm: below 1e-22 turns for 1e8 samples and any two
/// frequencies that differ by a millionth or more.
class LogarithmicPhase {
public:
    LogarithmicPhase(double from_hz, double to_hz, double rate_hz, std::int64_t sweep_samples)
        : rising_(to_hz > from_hz) {
        const Wide from = wide(from_hz);
        const Wide to = wide(to_hz);
        const Wide log_of_ratio = natural_log(rising_ ? to / from : from / to);
        const Wide length = wide_scaled(as_wide(sweep_samples), 0);
        octaves_per_sample_ = log_of_ratio / natural_log_of_two() / length;
        scale_ = from / wide(rate_hz) * length / log_of_ratio;
        offset_ = phase_after(scale_, 1);
    }

    TurnFraction operator()(std::int64_t own_index) const {
        const Uint256 product = full_product(octaves_per_sample_.mantissa, as_wide(own_index));
        const Split octaves = split(product, -octaves_per_sample_.exponent);
        auto whole = static_cast<int>(octaves.whole);
        if (rising_) return scaled_power(whole, octaves.fraction) - offset_;
        // 2^-(whole + fraction) = 2^(-whole - 1 + (1 - fraction)); 1 - fraction wraps to 0 only at 0.
        if (octaves.fraction != 0) ++whole;
        return offset_ - scaled_power(-whole, 0 - octaves.fraction);
    }

private:
    /// The fraction of scale * 2^(whole + fraction / 2^128).
    TurnFraction scaled_power(int whole, Uint128 fraction) const {
        const Uint256 product = full_product(scale_.mantissa, exp2_of_fraction(fraction));
        return split(product, 127 - whole - scale_.exponent).fraction;
    }

    bool rising_;
    Wide octaves_per_sample_, scale_;
    TurnFraction offset_ = 0;
};

template <class Phase>
class Chirp final : public PlacedStimulus {
public:
    Chirp(const Placement& placement, const Phase& phase, const Spectrum& spectrum)
        : PlacedStimulus(placement), phase_(phase), spectrum_(spectrum) {}
    Spectrum spectrum() const override { return spectrum_; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        for (double& ratio : ratios) ratio = placement().level_ratio * sine_of_turns(phase_(first_own_index++));
    }

    Phase phase_;
    Spectrum spectrum_;
};

StimulusOutcome make_chirp(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    const double from_hz = values.number(recipe, "from_hz").value_or(0.0);
    const double to_hz = values.number(recipe, "to_hz").value_or(0.0);
    if (auto error = frequency_error("from_hz", from_hz, context.rate_hz)) return *error;
    if (auto error = frequency_error("to_hz", to_hz, context.rate_hz)) return *error;
    if (from_hz == to_hz) {
        return refused("to_hz", number_text(to_hz) + " Hz equals from_hz, so nothing sweeps",
                       "give another frequency, or use shape = \"sine\"");
    }
    const Spectrum band{
        .bands = {{std::min(from_hz, to_hz) / context.rate_hz, std::max(from_hz, to_hz) / context.rate_hz}}};
    const std::int64_t sweep_samples = placement->own_samples();
    if (values.text(recipe, "sweep") == "logarithmic") {
        const LogarithmicPhase phase(from_hz, to_hz, context.rate_hz, sweep_samples);
        return std::unique_ptr<const Stimulus>(std::make_unique<Chirp<LogarithmicPhase>>(*placement, phase, band));
    }
    const LinearPhase phase(from_hz, to_hz, context.rate_hz, sweep_samples);
    return std::unique_ptr<const Stimulus>(std::make_unique<Chirp<LinearPhase>>(*placement, phase, band));
}

}  // namespace

Shape chirp_shape() {
    std::vector<Parameter> parameters = {
        {.name = "sweep",
         .type = ParameterType::choice,
         .choices = {"linear", "logarithmic"},
         .help = "Whether the frequency grows by the same number of hertz or by the same factor each sample."},
        {.name = "from_hz",
         .type = ParameterType::real,
         .unit = "Hz",
         .minimum = 0.0,
         .above_minimum = true,
         .required = true,
         .help = "Frequency at at_samples, not above Nyquist."},
        {.name = "to_hz",
         .type = ParameterType::real,
         .unit = "Hz",
         .minimum = 0.0,
         .above_minimum = true,
         .required = true,
         .help = "Frequency at the end, not above Nyquist and other than from_hz."},
    };
    const auto placement = placement_parameters(LevelSign::positive, 0.5, "Peak of the sine.");
    parameters.insert(parameters.end(), placement.begin(), placement.end());
    return {{.name = "chirp",
             .help = "A sine that sweeps from one frequency to another, up or down.",
             .parameters = std::move(parameters)},
            make_chirp};
}

}  // namespace halflsb
