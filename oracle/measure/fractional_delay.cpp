#include "oracle/measure/fractional_delay.hpp"

#include <algorithm>
#include <bit>
#include <cmath>
#include <complex>
#include <numbers>
#include <vector>

#include "oracle/measure/response_estimate.hpp"

namespace halflsb {
namespace {

using Complex = std::complex<double>;

struct Bin {
    std::size_t index;
    double cycles_per_sample;  ///< the middle of what the window shows
    double power, added;       ///< added: N
    Complex response;          ///< H
};

std::vector<Bin> bins_of(const ResponseSums& sums) {
    std::vector<Bin> bins;
    for (std::size_t k = 1; k + 1 < sums.cycles_per_sample.size(); ++k) {
        const ResponseTerm term{k, 1.0};
        const ResponseEstimate difference = estimate_of(sums, std::span(&term, 1));
        const double power = sums.sums.total(k).power;
        if (!(power > 0.0)) continue;
        // In bins; a power that falls this steeply within the window is no slope any more.
        constexpr double steepest = 0.5;
        const double slope = (sums.sums.total(k + 1).power - sums.sums.total(k - 1).power) / (2.0 * power);
        if (std::fabs(slope) > steepest) continue;
        const double width = sums.cycles_per_sample[k + 1] - sums.cycles_per_sample[k];
        bins.push_back({k, sums.cycles_per_sample[k] + sums.smoothing_bins2 * slope * width, power,
                        difference.variance * power, 1.0 + difference.value});
    }
    return bins;
}

/// 1 / the variance of the phase; a board that adds nothing at all is trusted by its power.
std::vector<double> weights_of(const std::vector<Bin>& bins) {
    constexpr std::size_t reach = 16;
    std::vector<double> weights;
    for (std::size_t i = 0; i < bins.size(); ++i) {
        const std::size_t begin = i < reach ? 0 : i - reach, end = std::min(bins.size(), i + reach + 1);
        double added = 0.0;
        for (std::size_t j = begin; j < end; ++j) added += bins[j].added;
        added /= static_cast<double>(end - begin);
        weights.push_back(bins[i].power * std::norm(bins[i].response) / (added + 1e-24 * bins[i].power));
    }
    return weights;
}

}  // namespace

std::size_t delay_segment_for(std::int64_t length_samples) {
    const auto segment = std::bit_floor(static_cast<std::uint64_t>(std::max<std::int64_t>(length_samples, 1)) / 64);
    return static_cast<std::size_t>(std::clamp<std::uint64_t>(segment, 64, 4096));
}

std::optional<FractionalDelay> fractional_delay(const ResponseSums& sums) {
    constexpr double least_weight = 100.0;  // 0.1 rad
    constexpr std::size_t fewest_bins = 8;
    const std::vector<Bin> bins = bins_of(sums);
    const std::vector<double> weights = weights_of(bins);
    double squares = 0.0, products = 0.0;
    std::vector<ResponseTerm> terms;
    FractionalDelay delay;
    for (std::size_t i = 0; i < bins.size(); ++i) {
        // Written so that a NaN is left out.
        if (!(weights[i] >= least_weight)) continue;
        const double f = bins[i].cycles_per_sample;
        squares += weights[i] * f * f;
        products += weights[i] * f * std::arg(bins[i].response);
        terms.push_back({bins[i].index, weights[i] * f / bins[i].response});
        if (terms.size() == 1) delay.from_cycles_per_sample = f;
        delay.to_cycles_per_sample = f;
    }
    if (terms.size() < fewest_bins) return std::nullopt;
    const double scale = -1.0 / (2.0 * std::numbers::pi * squares);
    for (ResponseTerm& term : terms) term.weight *= scale;
    const ResponseEstimate sum = estimate_of(sums, terms);
    delay.samples = products * scale;
    delay.standard_uncertainty = std::sqrt(sum.variance);
    delay.degrees = sum.degrees;
    return delay;
}

}  // namespace halflsb
