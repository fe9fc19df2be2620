#include "oracle/measure/noise_power.hpp"

#include <cmath>
#include <vector>

#include "oracle/measure/series_variance.hpp"

namespace halflsb {

namespace {

// Samples less one of their own, and the squares of these.
template <std::size_t Sums>
struct Moments {
    double mean = 0.0;   ///< of the shifted samples
    double power = 0.0;  ///< around that mean

    Moments(const DoublingBlocks<Sums>& blocks, std::size_t first_power, std::size_t second_power) {
        const auto samples = static_cast<double>(blocks.samples());
        mean = blocks.sum(first_power) / samples;
        power = blocks.sum(second_power) / samples - mean * mean;
        if (power < 0.0) power = 0.0;  // rounding, of samples that are all but the same
    }
    /// sum (s - mean)^2 over one block
    double squares_in(const DoublingBlocks<Sums>& blocks, std::size_t block, std::size_t first_power,
                      std::size_t second_power) const {
        return blocks.sum(block, second_power) - 2.0 * mean * blocks.sum(block, first_power) +
               mean * mean * static_cast<double>(blocks.samples_in(block));
    }
};

template <std::size_t Sums>
std::vector<double> means_of(const DoublingBlocks<Sums>& blocks, const std::vector<double>& lengths,
                             std::size_t which) {
    std::vector<double> means(lengths.size());
    for (std::size_t b = 0; b < means.size(); ++b) means[b] = blocks.sum(b, which) / lengths[b];
    return means;
}

template <std::size_t Sums>
NoiseFault fault_of(const DoublingBlocks<Sums>& blocks) {
    for (std::size_t which = 0; which < Sums; ++which) {
        if (!std::isfinite(blocks.sum(which))) return NoiseFault::not_finite;
    }
    return blocks.samples() < noise_least_samples ? NoiseFault::too_short : NoiseFault::none;
}

template <std::size_t Sums>
std::vector<double> lengths_of(const DoublingBlocks<Sums>& blocks) {
    std::vector<double> lengths(blocks.blocks());
    for (std::size_t b = 0; b < lengths.size(); ++b) lengths[b] = static_cast<double>(blocks.samples_in(b));
    return lengths;
}

}  // namespace

void NoiseRatioMeasure::add(std::span<const double> stimulus, std::span<const double> response) {
    if (blocks_.samples() == 0 && !stimulus.empty()) {
        first_stimulus_ = stimulus[0];
        first_response_ = response[0];
    }
    blocks_.add(stimulus.size(), [&](std::size_t i) {
        const double x = stimulus[i] - first_stimulus_, y = response[i] - first_response_;
        return DoublingBlocks<4>::Terms{x, y, x * x, y * y};
    });
}

NoiseRatioAnswer NoiseRatioMeasure::value() const {
    const NoiseFault fault = fault_of(blocks_);
    if (fault != NoiseFault::none) return {std::nullopt, fault};
    Moments<4> x(blocks_, 0, 2), y(blocks_, 1, 3);
    if (!(x.power > 0.0)) return {std::nullopt, NoiseFault::silent_stimulus};
    const auto lengths = lengths_of(blocks_);
    const auto x_means = series_variance(means_of(blocks_, lengths, 0), lengths, FittedCourse::constant),
               y_means = series_variance(means_of(blocks_, lengths, 1), lengths, FittedCourse::constant);
    if (!x_means || !y_means) return {std::nullopt, NoiseFault::too_short};
    x.power += x_means->variance / static_cast<double>(blocks_.samples());
    y.power += y_means->variance / static_cast<double>(blocks_.samples());
    const double ratio = y.power / x.power;
    std::vector<double> d(lengths.size());
    for (std::size_t b = 0; b < d.size(); ++b) {
        d[b] = (y.squares_in(blocks_, b, 1, 3) - ratio * x.squares_in(blocks_, b, 0, 2)) / (x.power * lengths[b]);
    }
    const auto series = series_variance(d, lengths, FittedCourse::constant);
    if (!series) return {std::nullopt, NoiseFault::too_short};

    NoiseRatioFigures figures;
    figures.samples = blocks_.samples();
    figures.degrees = series->degrees;
    figures.ratio = {ratio, std::sqrt(series->variance / static_cast<double>(blocks_.samples()))};
    if (ratio > 0.0) {
        const double decibels = 10.0 / std::log(10.0);
        figures.ratio_db = Figure{10.0 * std::log10(ratio), decibels * figures.ratio.standard_uncertainty / ratio};
    }
    figures.stimulus_power = x.power;
    figures.response_power = y.power;
    figures.stimulus_mean = first_stimulus_ + x.mean;
    figures.response_mean = first_response_ + y.mean;
    return {figures, NoiseFault::none};
}

void ExcessNoiseMeasure::add(std::span<const double> reference, std::span<const double> response) {
    if (blocks_.samples() == 0 && !reference.empty()) first_ = response[0] - reference[0];
    blocks_.add(reference.size(), [&](std::size_t i) {
        const double e = response[i] - reference[i] - first_;
        return DoublingBlocks<2>::Terms{e, e * e};
    });
}

ExcessNoiseAnswer ExcessNoiseMeasure::value() const {
    const NoiseFault fault = fault_of(blocks_);
    if (fault != NoiseFault::none) return {std::nullopt, fault};
    const Moments<2> e(blocks_, 0, 1);
    const auto lengths = lengths_of(blocks_);
    std::vector<double> squares(lengths.size());
    for (std::size_t b = 0; b < lengths.size(); ++b) squares[b] = e.squares_in(blocks_, b, 0, 1) / lengths[b];
    const auto of_power = series_variance(squares, lengths, FittedCourse::constant);
    const auto of_bias = series_variance(means_of(blocks_, lengths, 0), lengths, FittedCourse::constant);
    if (!of_power || !of_bias) return {std::nullopt, NoiseFault::too_short};
    const auto samples = static_cast<double>(blocks_.samples());

    ExcessNoiseFigures figures;
    figures.samples = blocks_.samples();
    figures.degrees = of_power->degrees;
    figures.power = {e.power + of_bias->variance / samples, std::sqrt(of_power->variance / samples)};
    figures.bias = {first_ + e.mean, std::sqrt(of_bias->variance / samples)};
    return {figures, NoiseFault::none};
}

std::string_view reason_of(NoiseFault fault) {
    switch (fault) {
        case NoiseFault::none:
            return "";
        case NoiseFault::too_short:
            return "too few samples for a noise power";
        case NoiseFault::not_finite:
            return "a sample is NaN or infinite, or too large to be squared";
        case NoiseFault::silent_stimulus:
            return "the stimulus does not vary";
    }
    return "";
}

}  // namespace halflsb
