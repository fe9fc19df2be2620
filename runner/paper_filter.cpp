#include "runner/paper_filter.hpp"

#include <algorithm>
#include <cmath>
#include <complex>
#include <vector>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/arithmetic/exact_chain.hpp"
#include "oracle/filters/closed_forms.hpp"
#include "oracle/filters/rates.hpp"
#include "oracle/measure/response.hpp"
#include "runner/paper_price.hpp"

namespace halflsb {
namespace {

constexpr std::size_t most_step_samples = 1024;

/// Where the gain first falls 3 dB below that at 0 Hz, by bisection between two points of a fine grid.
std::optional<double> corner_hz(const FilterChain& chain, double rate_hz) {
    const double wanted_db = gain_db(response_at(chain, 0.0)) - 10.0 * std::log10(2.0);
    if (!std::isfinite(wanted_db)) return std::nullopt;
    constexpr int steps = 4096;
    for (int step = 1; step <= steps; ++step) {
        double high = 0.5 * step / steps;
        if (gain_db(response_at(chain, high)) > wanted_db) continue;
        double low = 0.5 * (step - 1) / steps;
        for (int halving = 0; halving < 60; ++halving) {
            const double middle = (low + high) / 2.0;
            (gain_db(response_at(chain, middle)) > wanted_db ? low : high) = middle;
        }
        return high * rate_hz;
    }
    return std::nullopt;
}

PredictedPoint point_at(const FilterChain& chain, const FilterChain& declared, double cycles_per_sample,
                        double rate_hz) {
    constexpr double degrees = 180.0 / 3.14159265358979323846;
    const std::complex<double> design = response_at(chain, cycles_per_sample);
    PredictedPoint point{cycles_per_sample * rate_hz,
                         cycles_per_sample,
                         gain_db(design),
                         gain_db(response_at(declared, cycles_per_sample)),
                         std::nullopt,
                         std::nullopt};
    // At a zero of the response what is left is rounding, of which no phase can be told.
    if (point.design_db > -300.0) point.phase_degrees = std::arg(design) * degrees;
    if (!changes_rate(chain)) {
        const double delay = group_delay_samples(chain, cycles_per_sample);
        if (std::isfinite(delay)) point.group_delay_samples = delay;
    }
    return point;
}

/// 0, then six a decade up to half the rate.
std::vector<double> table_frequencies() {
    constexpr int per_decade = 6, points = 19;
    std::vector<double> frequencies{0.0};
    for (int point = 0; point < points; ++point)
        frequencies.push_back(0.5 * std::pow(10.0, static_cast<double>(point - points + 1) / per_decade));
    return frequencies;
}

/// Fine enough for a linear and for a logarithmic axis.
std::vector<double> plot_frequencies() {
    constexpr int linear = 256, per_decade = 32, decades = 3;
    std::vector<double> frequencies;
    for (int i = 0; i <= linear; ++i) frequencies.push_back(0.5 * i / linear);
    for (int i = 1; i <= per_decade * decades; ++i)
        frequencies.push_back(0.5 / linear * std::pow(10.0, -static_cast<double>(i) / per_decade));
    std::sort(frequencies.begin(), frequencies.end());
    return frequencies;
}

/// Until it has settled to a ten-thousandth of what it was given.
std::vector<double> settled_step_response(const FilterChain& chain) {
    const auto settled = flush_samples(chain, 1.0, 1e-4);
    std::size_t length = most_step_samples;
    if (settled && *settled + 2 < static_cast<std::int64_t>(length)) length = static_cast<std::size_t>(*settled + 2);
    return step_response(chain, length);
}

}  // namespace

double output_worth(const Signal& signal) {
    const double lsb = signal.output.has_lsb() ? lsb_value(signal.output) : 1.0;
    return lsb / std::fabs(signal.output_per_input);
}

PredictedFilter predict_filter(const FilterChain& chain, const DescribedChain* described, const Signal& signal) {
    PredictedFilter filter;
    filter.stages = chain.size();
    filter.largest_pole_radius = largest_pole_radius(chain);
    filter.l1_norm = l1_norm(chain);
    filter.dc_gain_db = gain_db(response_at(chain, 0.0));
    if (!is_linear(chain)) {
        filter.missing = "a median does not scale and add: it has no gain, no phase and no step response";
        return filter;
    }
    const FilterChain declared = described != nullptr ? exact_chain(*described).stages : declared_chain(chain);
    filter.corner_hz = corner_hz(chain, signal.rate_hz);
    for (const double f : table_frequencies()) filter.response.push_back(point_at(chain, declared, f, signal.rate_hz));
    for (const double f : plot_frequencies()) filter.plot.push_back(point_at(chain, declared, f, signal.rate_hz));
    if (changes_rate(chain)) {
        filter.missing = "the sample rate changes: there is no one group delay and no one step response";
        return filter;
    }
    filter.step_response = settled_step_response(chain);
    filter.price = price_of(chain, declared, signal);
    filter.warnings = recursion_warnings(chain, signal);
    return filter;
}

}  // namespace halflsb
