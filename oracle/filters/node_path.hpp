// The way from a point inside a chain to its output, or from the input to that point, as a chain of its own: what a
// rounding error at that point becomes, and what level the signal has there. And the sums over an impulse response
// that such questions end in; the largest output of a bounded error is l1_norm of its path (filter.hpp), the mean of
// one that has a mean is dc_gain.
//
// Linear stages of one sample rate. Paths take the coefficients as they stand (round them first, coefficients.hpp) and
// hold transfer functions alone: no arithmetic, no words, no channels.
#pragma once

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// A summing point: where b x - a y of a section, or the products of an FIR, come together. Sections count from 0; a
/// stage that is no cascade has section 0 alone.
struct FilterNode {
    std::size_t stage = 0, section = 0;
    /// An error made inside the loop comes back through the feedback of its section; one that is made behind it, in a
    /// copy of the result, does not. No difference for a stage without feedback.
    bool in_feedback = false;
};

/// From the summing point to the output: with in_feedback, 1 / A(z) of that section first; then the sections and the
/// stages behind it. A node that is not there gives an empty chain.
FilterChain path_to_output(const FilterChain& chain, FilterNode node);

/// From the input of the node's section (of its stage, where that is no cascade) to the output: the path of an error
/// in the states of direct form II, and of one in the samples that come in. in_feedback does not matter.
FilterChain path_from_section(const FilterChain& chain, FilterNode node);

/// From the input to the summing point, which in direct form I is the output of the section. in_feedback does not
/// matter.
FilterChain path_from_input(const FilterChain& chain, FilterNode node);

/// From the input to the state of direct form II: all that stands before the section, then its 1 / A(z).
FilterChain path_to_state(const FilterChain& chain, FilterNode node);

/// The gain at zero frequency, sum h[n]. Of an average rounding error as of a signal.
double dc_gain(const FilterChain& chain);

/// sum h[n]^2: the factor by which the power of white noise grows. In closed form for a single FIR, moving average,
/// section or comb (to some 2^-50 of itself); else run until what is left is proven to be below 1e-15 of the sum,
/// at most 2^24 samples, and the rest of a geometric series as in l1_norm.
double noise_power_gain(const FilterChain& chain);

/// The square root of noise_power_gain.
double l2_norm(const FilterChain& chain);

/// positive = sum of the h[n] above 0, negative = sum of those below (so it is not above 0). An error between low and
/// high makes at most high positive + low negative at the output, and at least low positive + high negative.
struct SignedSums {
    double positive = 0.0, negative = 0.0;
};

/// Until what is left is proven to be below `tail` of sum |h|, as l1_norm.
SignedSums signed_sums(const FilterChain& chain, double tail = 1e-12);

}  // namespace halflsb
