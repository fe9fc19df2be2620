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

#include "oracle/filters/stage_arithmetic.hpp"
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

/// y[n] = direct x[n] + forward x[n-delay_samples] - feedback y[n-delay_samples], zeros before the start.
struct Comb {
    int delay_samples = 1;
    double direct = 1.0, forward = 0.0, feedback = 0.0;
};

using FilterDesign = std::variant<MovingAverage, Fir, BiquadCascade, Comb>;

/// One [[filter]] of a plan.
struct FilterStage {
    FilterDesign design;
    /// The firmware stores each coefficient as a multiple of 2^-coefficient_fraction_bits, rounded
    /// half away from zero (coefficients.hpp). A moving average and a one-pole by shift have no coefficients and take
    /// none. The arithmetic of a stage that make_stage made says the same number.
    std::optional<int> coefficient_fraction_bits;
    StageArithmetic arithmetic = {};
    std::string kind = {};           ///< as the plan calls it: "one-pole" is a BiquadCascade of one section
    std::vector<int> channels = {};  ///< counted from 1; empty: every channel passes this stage
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

/// What a stage needs to know beside its own words.
struct StageContext {
    double rate_hz = 1.0;             ///< corners are given in Hz
    StageArithmetic arithmetic = {};  ///< that of the stage
    int channels = 1;                 ///< of the signal
};

/// An Error's place is the name of the parameter to blame (an unstable section is an error). Where the filter's
/// own words do not give coefficient_fraction_bits, those of the arithmetic hold. "unknown" is among the recipes,
/// for the reader and its messages, but there is no stage to make: it gives an Error of kind defect.
Outcome<FilterStage> make_stage(std::string_view kind, const ParameterValues& values, const StageContext& context = {});

/// The stages that a channel passes, counted from 1.
FilterChain chain_of_channel(const FilterChain& chain, int channel);

std::unique_ptr<Filter> make_filter(const FilterChain& chain);

/// Closed form of the frequency response at cycles_per_sample (0 .. 0.5), evaluated section by
/// section.
std::complex<double> response_at(const FilterChain& chain, double cycles_per_sample);
std::vector<double> impulse_response(const FilterChain& chain, std::size_t length);
/// Sum |h[n]| until what is left is proven to be below `tail` of the sum; for stable chains.
/// Some 40 time constants of the slowest pole are run, at most 2^24 samples; what would come after
/// those (poles within 2e-6 of the unit circle) is added as the rest of a geometric series.
double l1_norm(const FilterChain& chain, double tail = 1e-12);
/// How many zeros it takes until nothing is left of what went before. The first sample after N zeros stands N + 1
/// samples behind the newest of the past, so it is the smallest N with
///     full_scale sum over n > N of |h[n]| < half_step.
/// Exact for chains without feedback (16 points: 15 zeros); else an upper bound of the rest (impulse_run.hpp)
/// stands for what is not computed, and N is the smallest up to a millionth of the sum. full_scale and half_step
/// are in the output's unit and positive. nullopt: no N up to 2^24 could be proven to do. The same N on every machine.
/// Runs twice over about 3 N samples of the chain.
std::optional<std::int64_t> flush_samples(const FilterChain& chain, double full_scale, double half_step);
/// The largest pole radius of the chain; 0 for FIR and moving average.
double largest_pole_radius(const FilterChain& chain);

}  // namespace halflsb
