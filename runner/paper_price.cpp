#include "runner/paper_price.hpp"

#include <algorithm>
#include <cmath>
#include <complex>

#include "oracle/filters/closed_forms.hpp"
#include "oracle/filters/recursion.hpp"
#include "oracle/measure/response.hpp"
#include "runner/paper_filter.hpp"

namespace halflsb {
namespace {

constexpr double most_evaluations = 1 << 23;
constexpr std::int64_t longest_difference = std::int64_t{1} << 21;

/// How many numbers one evaluation of the response looks at.
std::size_t coefficients_of(const FilterChain& chain) {
    std::size_t count = 1;
    for (const FilterStage& stage : chain) {
        if (const auto* fir = std::get_if<Fir>(&stage.design)) count += fir->taps.size();
        if (const auto* cascade = std::get_if<BiquadCascade>(&stage.design)) count += 5 * cascade->sections.size();
    }
    return count;
}

std::vector<double> frequencies_of(const FilterChain& chain) {
    const double fitting = most_evaluations / static_cast<double>(coefficients_of(chain));
    const int points = static_cast<int>(std::clamp(fitting, 256.0, 4096.0));
    std::vector<double> frequencies;
    for (int i = 0; i <= points; ++i) frequencies.push_back(0.5 * i / points);
    constexpr int per_decade = 64;
    for (int i = 1; i <= 4 * per_decade; ++i)
        frequencies.push_back(0.5 / points * std::pow(10.0, -static_cast<double>(i) / per_decade));
    // A sharp peak may stand between two of them.
    for (const FilterStage& stage : chain) {
        const auto* cascade = std::get_if<BiquadCascade>(&stage.design);
        if (cascade == nullptr) continue;
        for (const BiquadSection& section : cascade->sections) {
            for (const std::complex<double>& pole : poles_of(section)) {
                const double at = std::fabs(std::arg(pole)) / (2.0 * 3.14159265358979323846);
                const double width = std::max(1.0 - std::abs(pole), 1e-9) / (2.0 * 3.14159265358979323846);
                for (const double away : {-2.0, -1.0, -0.5, 0.0, 0.5, 1.0, 2.0})
                    frequencies.push_back(std::clamp(at + away * width, 0.0, 0.5));
            }
        }
    }
    std::sort(frequencies.begin(), frequencies.end());
    return frequencies;
}

void compare_gains(const FilterChain& design, const FilterChain& declared, double rate_hz, PredictedPrice& price) {
    const std::vector<double> frequencies = frequencies_of(design);
    std::vector<double> gains;
    for (const double f : frequencies) gains.push_back(gain_db(response_at(design, f)));
    const double peak = *std::max_element(gains.begin(), gains.end());
    if (!std::isfinite(peak)) return;
    for (std::size_t i = 0; i < gains.size(); ++i) {
        if (gains[i] < peak - price.passband_db) continue;
        const double difference = gain_db(response_at(declared, frequencies[i])) - gains[i];
        if (price.gain_difference_db && std::fabs(difference) <= std::fabs(*price.gain_difference_db)) continue;
        price.gain_difference_db = difference;
        price.at_hz = frequencies[i] * rate_hz;
    }
}

/// sum |h_declared - h_design|, to a ten-thousandth of what half a step is.
std::optional<double> l1_of_difference(const FilterChain& design, const FilterChain& declared, double full_scale,
                                       double worth) {
    const auto first = flush_samples(design, full_scale, 1e-4 * worth),
               second = flush_samples(declared, full_scale, 1e-4 * worth);
    if (!first || !second || std::max(*first, *second) > longest_difference) return std::nullopt;
    const auto length = static_cast<std::size_t>(std::max(*first, *second)) + 1;
    const std::vector<double> a = impulse_response(design, length), b = impulse_response(declared, length);
    double sum = 0.0;
    for (std::size_t n = length; n-- > 0;) sum += std::fabs(b[n] - a[n]);
    return sum;
}

}  // namespace

PredictedPrice price_of(const FilterChain& design, const FilterChain& declared, const Signal& signal) {
    PredictedPrice price;
    compare_gains(design, declared, signal.rate_hz, price);
    const double full_scale = full_scale_value(signal.input), worth = output_worth(signal);
    if (const auto l1 = l1_of_difference(design, declared, full_scale, worth))
        price.output_difference = *l1 * full_scale / worth;
    const double design_dc = response_at(design, 0.0).real(), declared_dc = response_at(declared, 0.0).real();
    if (std::isfinite(design_dc)) price.design_dc_gain = design_dc;
    if (std::isfinite(declared_dc)) price.declared_dc_gain = declared_dc;
    price.design_pole_radius = largest_pole_radius(design);
    price.declared_pole_radius = largest_pole_radius(declared);
    return price;
}

std::vector<RecursionWarning> recursion_warnings(const FilterChain& chain, const Signal& signal) {
    std::vector<RecursionWarning> warnings;
    if (!signal.output.has_lsb()) return warnings;
    for (std::size_t i = 0; i < chain.size(); ++i) {
        const auto* recursion = std::get_if<Recursion>(&chain[i].design);
        if (recursion == nullptr || recursion->a.size() < 2) continue;
        const auto at = chain.begin() + static_cast<std::ptrdiff_t>(i);
        const double before = l1_norm(FilterChain(chain.begin(), at)),
                     behind = l1_norm(FilterChain(at + 1, chain.end()));
        const double loss =
            recursion_loss(*recursion) * before * behind * full_scale_value(signal.input) / output_worth(signal);
        if (loss > 0.5) warnings.push_back({i + 1, static_cast<int>(recursion->a.size()) - 1, loss});
    }
    return warnings;
}

}  // namespace halflsb
