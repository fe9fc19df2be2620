// The floating-point reference: what the design says a filter returns, in double precision.
//
// One sign convention everywhere: y[n] = sum b[k] x[n-k] - sum a[k] y[n-k], a0 = 1.
#pragma once

#include <complex>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <variant>
#include <vector>

#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// y[n] = (x[n] + ... + x[n-points+1]) / points, zeros before the start.
struct MovingAverage {
    int points = 1;
};

/// y[n] = sum taps[k] x[n-k], zeros before the start.
struct Fir {
    std::vector<double> taps;
};

/// H(z) = (b0 + b1 z^-1 + b2 z^-2) / (1 + a1 z^-1 + a2 z^-2)
struct BiquadSection {
    double b0 = 1.0, b1 = 0.0, b2 = 0.0, a1 = 0.0, a2 = 0.0;
};

/// Sections in the order in which the signal passes them.
struct BiquadCascade {
    std::vector<BiquadSection> sections;
};

using FilterDesign = std::variant<MovingAverage, Fir, BiquadCascade>;

/// One [[filter]] of a plan.
struct FilterStage {
    FilterDesign design;
    /// The firmware stores each coefficient as a multiple of 2^-coefficient_fraction_bits, rounded
    /// half away from zero. A moving average has no coefficients and takes none.
    std::optional<int> coefficient_fraction_bits;
};

/// Stages in the order in which the signal passes them.
using FilterChain = std::vector<FilterStage>;

/// The contract of every reference filter. Values in, values out, one for one; splitting the input
/// into blocks in any way gives the same output, bit for bit; reset() equals a fresh one.
class Filter {
public:
    virtual ~Filter() = default;
    virtual void reset() = 0;
    /// in.size() == out.size(); the spans are equal or do not overlap.
    virtual void process(std::span<const double> in, std::span<double> out) = 0;
};

/// Every filter kind with its parameters; the only place their words stand.
const std::vector<Recipe>& filter_recipes();

/// An Error's place is the name of the parameter to blame (an unstable section is an error).
Outcome<FilterStage> make_stage(std::string_view kind, const ParameterValues& values);

std::unique_ptr<Filter> make_filter(const FilterChain& chain);

/// Closed form of the frequency response at cycles_per_sample (0 .. 0.5), evaluated section by
/// section.
std::complex<double> response_at(const FilterChain& chain, double cycles_per_sample);
std::vector<double> impulse_response(const FilterChain& chain, std::size_t length);
/// Sum |h[n]| until the tail is below `tail` of the sum; for stable chains.
/// Some 24 time constants of the slowest pole are run, at most 2^24 samples; what would come after
/// those (poles within 2e-6 of the unit circle) is added as the rest of a geometric series.
double l1_norm(const FilterChain& chain, double tail = 1e-12);
/// The largest pole radius of the chain; 0 for FIR and moving average.
double largest_pole_radius(const FilterChain& chain);

}  // namespace halflsb
