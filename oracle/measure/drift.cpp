#include "oracle/measure/drift.hpp"

#include <cmath>
#include <vector>

#include "oracle/measure/series_variance.hpp"

namespace halflsb {

namespace {

Figure scaled(const Figure& figure, double factor) {
    return {figure.value * factor, figure.standard_uncertainty * factor};
}

}  // namespace

void DriftMeasure::add(std::span<const double> reference, std::span<const double> response) {
    blocks_.add(reference.size(), [&](std::size_t i) { return DoublingBlocks<1>::Terms{response[i] - reference[i]}; });
}

DriftAnswer DriftMeasure::value() const {
    if (!std::isfinite(blocks_.sum(0))) return {std::nullopt, DriftFault::not_finite};
    if (blocks_.samples() < drift_least_samples) return {std::nullopt, DriftFault::too_short};
    const std::size_t count = blocks_.blocks();
    const auto block_samples = static_cast<double>(blocks_.block_samples());
    std::vector<double> samples(count), means(count), middles(count);  // middles: index less first_index
    for (std::size_t b = 0; b < count; ++b) {
        samples[b] = static_cast<double>(blocks_.samples_in(b));
        means[b] = blocks_.sum(b, 0) / samples[b];
        middles[b] = static_cast<double>(b) * block_samples + 0.5 * (samples[b] - 1.0);
    }
    // Around the middle of the run and the first mean, so that nothing cancels.
    const auto total = static_cast<double>(blocks_.samples());
    const double centre = 0.5 * (total - 1.0);
    CompensatedSum squares, products, sum;
    for (std::size_t b = 0; b < count; ++b) {
        const double x = middles[b] - centre, y = means[b] - means[0];
        squares.add(samples[b] * x * x);
        products.add(samples[b] * x * y);
        sum.add(samples[b] * y);
    }
    const auto series = series_variance(means, samples, FittedCourse::line);
    if (!series) return {std::nullopt, DriftFault::too_short};
    const double deviation = std::sqrt(series->variance);

    DriftFigures figures;
    figures.first_index = first_index_;
    figures.samples = blocks_.samples();
    figures.block_samples = blocks_.block_samples();
    figures.blocks = count;
    figures.degrees = series->degrees;
    figures.slope_per_sample = {products.value() / squares.value(), deviation / std::sqrt(squares.value())};
    if (rate_hz_) figures.slope_per_hour = scaled(figures.slope_per_sample, 3600.0 * *rate_hz_);
    figures.change_over_run = scaled(figures.slope_per_sample, total - 1.0);
    figures.intercept = {
        means[0] + (sum.value() / total - figures.slope_per_sample.value * centre),
        std::hypot(deviation / std::sqrt(total), figures.slope_per_sample.standard_uncertainty * centre)};
    // A last block of a few samples would show their noise.
    const std::size_t full = samples[count - 1] < block_samples ? count - 1 : count;
    figures.last_less_first = {means[full - 1] - means[0], deviation * std::sqrt(2.0 / block_samples)};
    figures.largest_change_index = first_index_;
    for (std::size_t b = 1; b < full; ++b) {
        const double change = means[b] - means[0];
        if (std::fabs(change) <= std::fabs(figures.largest_change)) continue;
        figures.largest_change = change;
        figures.largest_change_index = first_index_ + static_cast<std::int64_t>(b) * blocks_.block_samples();
    }
    return {figures, DriftFault::none};
}

std::string_view reason_of(DriftFault fault) {
    switch (fault) {
        case DriftFault::none:
            return "";
        case DriftFault::too_short:
            return "too few samples for a drift";
        case DriftFault::not_finite:
            return "an error is NaN or infinite";
    }
    return "";
}

}  // namespace halflsb
