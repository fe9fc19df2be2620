#include "oracle/measure/state_levels.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <cstddef>
#include <cstdint>

#include "oracle/measure/sums.hpp"

namespace halflsb {

namespace {

constexpr std::size_t bins = 100;

struct Histogram {
    double least = 0.0, width = 0.0;
    std::array<std::int64_t, bins> counts{};

    std::size_t bin_of(double sample) const {
        return std::min(static_cast<std::size_t>((sample - least) / width), bins - 1);
    }
    bool is_upper(double sample) const { return bin_of(sample) >= bins / 2; }
};

double mean_of_bin(const Histogram& histogram, std::size_t bin, std::span<const double> samples) {
    CompensatedSum sum;
    for (const double sample : samples) {
        if (histogram.bin_of(sample) == bin) sum.add(sample);
    }
    return sum.value() / static_cast<double>(histogram.counts[bin]);
}

}  // namespace

std::optional<StateLevels> state_levels_of(std::span<const double> samples) {
    if (samples.size() < 2) return std::nullopt;
    Histogram histogram;
    double greatest = samples[0];
    histogram.least = samples[0];
    for (const double sample : samples) {
        if (!std::isfinite(sample)) return std::nullopt;
        histogram.least = std::min(histogram.least, sample);
        greatest = std::max(greatest, sample);
    }
    histogram.width = (greatest - histogram.least) / static_cast<double>(bins);
    if (!(histogram.width > 0.0) || !std::isfinite(histogram.width)) return std::nullopt;
    for (const double sample : samples) ++histogram.counts[histogram.bin_of(sample)];

    const bool begins_high = histogram.is_upper(samples.front()), ends_high = histogram.is_upper(samples.back());
    if (begins_high == ends_high) return std::nullopt;
    std::size_t lower = 0, upper = bins - 1;
    for (std::size_t i = 0; i < bins / 2; ++i) {
        if (histogram.counts[i] > histogram.counts[lower]) lower = i;
        if (histogram.counts[bins - 1 - i] > histogram.counts[upper]) upper = bins - 1 - i;
    }
    const double low = mean_of_bin(histogram, lower, samples), high = mean_of_bin(histogram, upper, samples);
    const double uncertainty = histogram.width / std::sqrt(12.0);
    if (begins_high) return StateLevels{high, low, uncertainty};
    return StateLevels{low, high, uncertainty};
}

}  // namespace halflsb
