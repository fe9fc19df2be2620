// What `halflsb predict` tells of a plan on paper, as record and report see it.
//
// Errors and levels at the output are in output LSB, or, where the output is f32 and has none, as values of the output
// (`has_lsb` of the format says which). Levels at a node are in steps of the node's own word.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

#include "oracle/arithmetic/rail_watch.hpp"
#include "oracle/judge/plan.hpp"
#include "oracle/judge/sensitivity.hpp"

namespace halflsb {

/// Gain, phase and delay at one frequency.
struct PredictedPoint {
    double frequency_hz = 0.0, cycles_per_sample = 0.0, design_db = 0.0, declared_db = 0.0;
    std::optional<double> phase_degrees;        ///< of the design; none where nothing comes through
    std::optional<double> group_delay_samples;  ///< of the design; none where the rate changes, too
};

/// What rounding the coefficients costs, design -> declared.
struct PredictedPrice {
    double passband_db = 20.0;  ///< gains are compared where the design's is within this of its peak
    std::optional<double> gain_difference_db, at_hz;  ///< the largest one in size, declared less design; none: no gain
    /// L1 norm of the difference of the impulse responses x full scale of the input, at the output; none: too long.
    std::optional<double> output_difference;
    std::optional<double> design_dc_gain, declared_dc_gain;  ///< output over input at 0 Hz
    double design_pole_radius = 0.0, declared_pole_radius = 0.0;
};

/// A b/a form that is no safe recipe for a program in double precision: what its own recursion may lose, at the output.
struct RecursionWarning {
    std::size_t stage = 0;  ///< from 1
    int order = 0;
    double loss = 0.0;
};

/// What the plan does not say, and what was taken for it.
struct PredictedAssumption {
    std::size_t stage = 0;  ///< from 1
    std::vector<std::string> taken;
};

/// A rounding point.
struct PredictedTerm {
    std::string name;
    int count = 1;      ///< errors a sample
    double step = 1.0;  ///< the last place kept, in output LSB
    std::optional<double> lowest,
        highest;  ///< of the error there, in such steps; none where only the output's is known
    double l1 = 0.0, noise_gain = 0.0, dc_gain = 0.0;  ///< of its path to the output
    double lower = 0.0, upper = 0.0;                   ///< at the output
    std::string formula;
};

struct PredictedError {
    double lower = 0.0, upper = 0.0, rms = 0.0, bias_lower = 0.0, bias_upper = 0.0;
    bool is_statistical = false;
    std::string why;  ///< rms and bias are what they are
    bool operator==(const PredictedError&) const = default;

    double largest() const { return upper > -lower ? upper : -lower; }
    double bias() const { return bias_upper > -bias_lower ? bias_upper : -bias_lower; }
};

struct PredictedCaseError {
    std::string name;
    std::int64_t samples = 0;  ///< judged
    PredictedError error;
};

struct PredictedNode {
    std::string name;
    std::optional<int> bits;  ///< none: the plan does not say, as many as it takes
    int fraction_bits = 0;
    Overflow overflow = Overflow::wrap;
    double worst = 0.0, error = 0.0;  ///< in steps of the word
    double rail_ratio = 0.0;          ///< worst over the end of the word; 0 without bits
    RailEffect effect = RailEffect::lost;
    bool is_reachable = false;
    std::optional<int> bits_needed, integer_bits_needed;  ///< that the rail cannot be reached; none: infinite
    /// The stimulus that drives it hardest: full scale times these signs, "+-". Empty where there is no one impulse
    /// response. `reached` is what it comes to, in steps.
    std::string signs;
    double reached = 0.0;
};

/// Of a CIC: what wraps in one comes back in the others, so no level tells how wide it must be.
struct PredictedRegister {
    std::string name;         ///< "stage 1, integrator 2"
    std::optional<int> bits;  ///< none: the plan does not say, as many as it takes
    int fraction_bits = 0;
    Overflow overflow = Overflow::wrap;
    int bits_needed = 0;
    int discarded_bits = 0;               ///< low bits that it does not have, counted from the LSB of the input
    std::optional<int> may_discard_bits;  ///< by Hogenauer's rule, of a decimator
};

struct PredictedCoefficients {
    std::size_t stage = 0;  ///< from 1
    int fraction_bits = 0, bits_needed = 0;
    std::optional<int> bits;  ///< said
};

/// What remains when the input has ended. As output codes from the code of zero, and in output LSB.
struct PredictedSilence {
    double lower = 0.0, upper = 0.0;  ///< proven
    std::int64_t lowest_code = 0, highest_code = 0;
    struct Searched {
        std::int64_t lowest = 0, highest = 0, period_samples = 1;
    };
    std::optional<Searched> searched;  ///< every cycle was tried
    struct Estimate {
        std::string name;
        double step = 1.0;  ///< of the state, in output LSB
        std::int64_t oscillation = 0, constant = 0;
    };
    std::vector<Estimate> estimates;  ///< no bounds
};

/// What follows from the described arithmetic of a channel.
struct PredictedArithmetic {
    std::vector<PredictedAssumption> assumed;
    std::optional<double> largest_if_rounding_said;  ///< with half-up where no rounding is said
    std::vector<PredictedTerm> terms;
    PredictedError error;                   ///< worst case, over the longest case
    double reference_error = 0.0;           ///< of double precision, in `error`
    std::vector<PredictedCaseError> cases;  ///< those whose error is another one
    std::vector<PredictedNode> nodes;
    std::vector<PredictedRegister> registers;
    std::vector<PredictedCoefficients> coefficients;
    std::optional<PredictedSilence> silence;  ///< none of a float32 output
};

/// A filter on paper, as a channel has it.
struct PredictedFilter {
    std::vector<int> channels;
    std::size_t stages = 0;
    double largest_pole_radius = 0.0, l1_norm = 0.0, dc_gain_db = 0.0;
    std::optional<double> corner_hz;       ///< where the gain is first 3 dB below that at 0 Hz
    std::string missing;                   ///< why there is no response, or no delay and no price; "" when there is
    std::vector<PredictedPoint> response;  ///< for a table
    std::vector<PredictedPoint> plot;      ///< for a drawing, in ascending order
    std::vector<double> step_response;     ///< of the design, at most 1024 samples
    std::optional<PredictedPrice> price;
    std::vector<RecursionWarning> warnings;
    std::optional<PredictedArithmetic> arithmetic;
};

struct PredictedCase {
    std::string name;
    std::int64_t samples = 0;
    bool latency_told = false;
    std::optional<double> wire_s;
};

/// What the plan's rules would see of a changed arithmetic.
struct PredictedSight {
    Sensitivity sensitivity;
    bool rounding_is_assumed = false;  ///< the plan says none: half-up was taken
    bool has_exact_rule = false;
    std::size_t cases = 0, cases_left_out = 0;  ///< left out: the budget of samples was spent
};

struct Prediction {
    std::string title, plan_file;
    Signal signal;
    std::vector<PredictedFilter> filters;  ///< none for an unknown filter
    std::optional<PredictedSight> sight;
    std::vector<PredictedCase> cases;
    std::optional<double> wire_s;
};

}  // namespace halflsb
