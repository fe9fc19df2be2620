// A square wave: the level for the first part of each period, its negative for the rest.
//
// Sample n of the shape is high while frac(n f / r) < duty, r / f the period in samples. Both sides are
// compared in integers, so that 1000 Hz at 48000 Hz has edges each 24 samples for ever; the duty, which
// is seldom exact in binary, is lessened by a millionth of a sample, so that 0.1 of a period of 10
// samples is 1 sample and not 2.
//
// No spectrum is claimed: the harmonics above Nyquist fold back among those below it, and with a period
// that is no whole number of samples no line stands apart from the others.
#include <algorithm>
#include <cmath>

#include "stimuli/number_text.hpp"
#include "stimuli/shape.hpp"
#include "stimuli/wide.hpp"

namespace halflsb {

namespace {

/// numerator / denominator of a period advance with each sample; below 2^88 each.
struct Cycle {
    Uint128 numerator = 1, denominator = 2;
};

Uint128 shifted_left(std::uint64_t whole, int count) { return static_cast<Uint128>(whole) << count; }

/// f / r, exact. r / f is at most the longest stimulus, below 2^34, so the exponents are near each other.
Cycle cycle_of(double frequency_hz, double rate_hz) {
    int f_exponent = 0, r_exponent = 0;
    const auto f_bits = static_cast<std::uint64_t>(std::frexp(frequency_hz, &f_exponent) * 0x1p53);
    const auto r_bits = static_cast<std::uint64_t>(std::frexp(rate_hz, &r_exponent) * 0x1p53);
    // f <= r / 2, so r has the larger exponent, by at most 35.
    const int apart = r_exponent - f_exponent;
    return {f_bits, shifted_left(r_bits, apart)};
}

/// Both scaled up, so that a millionth of a sample is a whole number.
Cycle fine(Cycle cycle) {
    while (cycle.denominator >> 87 == 0) {
        cycle.numerator <<= 1;
        cycle.denominator <<= 1;
    }
    return cycle;
}

class Square final : public PlacedStimulus {
public:
    Square(const Placement& placement, const Cycle& cycle, double duty) : PlacedStimulus(placement), cycle_(cycle) {
        const Wide part = wide(duty);
        high_below_ = split(full_product(part.mantissa, cycle.denominator), -part.exponent).whole;
        high_below_ -= cycle.numerator / 1'000'000U;
    }
    Spectrum spectrum() const override { return {}; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        // Below 2^34 times 2^87.
        Uint128 phase =
            cycle_.numerator * static_cast<Uint128>(static_cast<std::uint64_t>(first_own_index)) % cycle_.denominator;
        const double level = placement().level_ratio;
        for (double& ratio : ratios) {
            ratio = phase < high_below_ ? level : -level;
            phase += cycle_.numerator;
            if (phase >= cycle_.denominator) phase -= cycle_.denominator;
        }
    }

    Cycle cycle_;
    Uint128 high_below_ = 0;
};

StimulusOutcome make_square(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    const bool in_samples = values.has("period_samples");
    if (in_samples && values.has("frequency_hz")) {
        return refused("period_samples", "frequency_hz is given too", "keep one of the two");
    }
    Cycle cycle;
    double period_samples = 0.0;
    if (in_samples) {
        const std::int64_t period = values.integer(recipe, "period_samples").value_or(2);
        cycle = {1U, static_cast<std::uint64_t>(period)};
        period_samples = static_cast<double>(period);
    } else {
        const auto frequency_hz = values.number(recipe, "frequency_hz");
        if (!frequency_hz) {
            return refused("frequency_hz", "\"square\" needs frequency_hz or period_samples", "give one of the two");
        }
        if (auto error = frequency_error("frequency_hz", *frequency_hz, context.rate_hz)) return *error;
        period_samples = context.rate_hz / *frequency_hz;
        if (!(period_samples <= static_cast<double>(longest_stimulus_samples))) {
            return refused("frequency_hz",
                           number_text(*frequency_hz) + " Hz has a period of " + number_text(period_samples) +
                               " samples, longer than any stimulus",
                           "give a higher frequency, or use shape = \"step\"");
        }
        cycle = cycle_of(*frequency_hz, context.rate_hz);
    }
    const double duty = values.number(recipe, "duty").value_or(0.5);
    const double shorter_samples = std::min(duty * period_samples, period_samples - duty * period_samples);
    constexpr double shortest_samples = 1.0 - 1e-6;
    if (!(shorter_samples >= shortest_samples)) {
        return refused("duty",
                       "with " + number_text(duty) + " of a period of " + number_text(period_samples) +
                           " samples one of the levels lasts less than a sample",
                       "give a duty nearer to 0.5, or a longer period");
    }
    return std::unique_ptr<const Stimulus>(std::make_unique<Square>(*placement, fine(cycle), duty));
}

}  // namespace

Shape square_shape() {
    std::vector<Parameter> parameters = {
        {.name = "frequency_hz",
         .type = ParameterType::real,
         .unit = "Hz",
         .minimum = 0.0,
         .above_minimum = true,
         .help = "Frequency, not above Nyquist; or give period_samples."},
        {.name = "period_samples",
         .type = ParameterType::integer,
         .unit = "samples",
         .minimum = 2.0,
         .maximum = static_cast<double>(longest_stimulus_samples),
         .help = "The period, in place of frequency_hz."},
        {.name = "duty",
         .type = ParameterType::real,
         .unit = "of a period",
         .minimum = 0.0,
         .maximum = 1.0,
         .above_minimum = true,
         .default_value = 0.5,
         .help = "How much of each period is high, its first part; high and low last at least a sample."},
    };
    const auto placement =
        placement_parameters(LevelSign::positive, 0.5, "The high level; the low one is its negative.");
    parameters.insert(parameters.end(), placement.begin(), placement.end());
    return {{.name = "square", .help = "Two levels in turn, high first.", .parameters = std::move(parameters)},
            make_square};
}

}  // namespace halflsb
