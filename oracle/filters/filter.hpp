// The floating-point reference: what the design says a filter returns, in double precision.
//
// design.hpp has the numbers of each kind and their conventions; rates.hpp what follows where the rate changes.
#pragma once

#include <complex>
#include <memory>
#include <optional>
#include <span>
#include <string>
#include <vector>

#include "oracle/filters/design.hpp"
#include "oracle/filters/stage_arithmetic.hpp"
#include "stimuli/outcome.hpp"
#include "stimuli/parameter.hpp"

namespace halflsb {

/// What stands before a stage's first sample after a reset.
enum class Initial {
    zeros,
    first_sample,  ///< that sample itself, as if it had gone on for ever
    growing,       ///< nothing: a moving average is the mean of the samples so far
};

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
    Initial initial = Initial::zeros;

    bool operator==(const FilterStage&) const = default;
};

/// Stages in the order in which the signal passes them.
using FilterChain = std::vector<FilterStage>;

/// The contract of every reference filter. Values in, values out, one for one unless the rate changes; splitting
/// the input into blocks in any way gives the same output, bit for bit; reset() equals a fresh one.
class Filter {
public:
    virtual ~Filter() = default;
    virtual void reset() = 0;
    /// How many outputs the next `inputs` samples will give. Where the rate changes it hangs on how many came before.
    virtual std::size_t outputs_for(std::size_t inputs) const { return inputs; }
    /// out.size() == outputs_for(in.size()). Where no stage changes the rate the spans are equal or do not overlap;
    /// else they do not overlap.
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

/// The chain with every stage's Initial zeros: what a filter is that has been sent zeros for long enough.
FilterChain from_rest(FilterChain chain);

/// Honours each stage's Initial, at the first sample that reaches it after a reset.
std::unique_ptr<Filter> make_filter(const FilterChain& chain);

/// Whether the chain scales and adds. A median does not: no response and no impulse response says what it does, and
/// rules and predictions that need one must not be asked of such a chain.
bool is_linear(const FilterChain& chain);

// The functions below are of a chain at rest (Initial zeros).

/// Closed form of the frequency response at cycles_per_sample (0 .. 0.5) of the input, evaluated section by section.
/// Where the rate changes: the complex gain from e^(j 2 pi f n) to its image of the same frequency in Hz at the output,
/// output m at the time of its input index m down / up (rates.hpp), so a decimator's phase_samples are a factor
/// e^(j 2 pi f phase_samples), f at its input. Each stage is evaluated at its own rate; an
/// interpolator of R counts as its filter over R, the share of the base image. Above half the output rate that image
/// stands at its alias, and the gain is what comes through there. Not a number for a chain that is not linear.
std::complex<double> response_at(const FilterChain& chain, double cycles_per_sample);
/// What the chain returns for a 1 and then zeros, `length` outputs. Of a decimator that is each factor-th value of the
/// response of its filter, from that of its phase_samples on.
std::vector<double> impulse_response(const FilterChain& chain, std::size_t length);
/// The largest output for inputs within -1 .. 1: sum |h[n]| until what is left is proven to be below `tail` of the
/// sum; for stable chains.
/// Some 40 time constants of the slowest pole are run, at most 2^24 samples; what would come after
/// those (poles within 2e-6 of the unit circle) is added as the rest of a geometric series. Where the rate changes, of
/// the output phase that has the most. An upper bound instead, the product of stretches of the chain, around a median
/// and where the rate cycle is longer than 4096 samples or its responses take minutes (multirate_norms.hpp).
double l1_norm(const FilterChain& chain, double tail = 1e-12);
/// How many zeros it takes until nothing is left of what went before. The first sample after N zeros stands N + 1
/// samples behind the newest of the past, so it is the smallest N with
///     full_scale sum over n > N of |h[n]| < half_step.
/// Exact for chains without feedback (16 points: 15 zeros); else an upper bound of the rest (impulse_run.hpp)
/// stands for what is not computed, and N is the smallest up to a millionth of the sum. full_scale and half_step
/// are in the output's unit and positive. nullopt: no N up to 2^24 could be proven to do. The same N on every machine.
/// Runs twice over about 3 N samples of the chain.
/// Enough, though perhaps not the smallest, where the rate changes (then a multiple of the rate cycle's inputs, none
/// where that is beyond 4096, takes minutes, or more than 2^20 zeros would be needed) and around a median.
std::optional<std::int64_t> flush_samples(const FilterChain& chain, double full_scale, double half_step);
/// The largest pole radius of the chain, each stage at its own rate; 0 where nothing is fed back.
double largest_pole_radius(const FilterChain& chain);

}  // namespace halflsb
