// Chains that change the sample rate: by how much, how many samples come out, and when the pattern repeats.
//
// Delay conventions. Output m of a chain that raises the rate by up and lowers it by down belongs to the time of
// input m down / up, whichever inputs its decimators wait for (phase_samples): that is part of the delay. A filter's
// delay counts from there, and a frequency in Hz keeps its meaning from stage to stage; what a stage is given in Hz (a
// corner) is meant at the rate of its own input: output_rate_hz walks the chain.
#pragma once

#include <cstdint>

#include "oracle/filters/filter.hpp"

namespace halflsb {

/// Output rate over input rate, in lowest terms. A term beyond 2^30 stays there: no chain of use comes near.
struct RateRatio {
    int up = 1, down = 1;
    bool operator==(const RateRatio&) const = default;
};

RateRatio rate_ratio(const FilterDesign& design);
/// Of a decimator which input of each group of its factor gives the output, counted from 0; of any other kind 0.
int phase_samples_of(const FilterDesign& design);
RateRatio rate_ratio(const FilterChain& chain);
/// Whether any stage changes the rate, even when a later one takes it back.
bool changes_rate(const FilterChain& chain);
/// Samples a second behind the stage.
double output_rate_hz(const FilterStage& stage, double input_rate_hz);

/// How many outputs the first `inputs` samples after a reset give. A decimator of R gives
/// floor((inputs + R - 1 - phase_samples) / R).
std::int64_t outputs_after(const FilterChain& chain, std::int64_t inputs);

/// After `inputs` samples every decimator of the chain stands where it stood after a reset, and `outputs` samples have
/// come out; the smallest such numbers. A chain of rate 1 has 1 and 1; one that halves and doubles has 2 and 2, since
/// it treats even and odd samples unlike. What is sent before a sample that shall meet a chain as after a reset must
/// be a multiple of `inputs`. Beyond 2^30 both stay there.
struct RateCycle {
    std::int64_t inputs = 1, outputs = 1;
    bool operator==(const RateCycle&) const = default;
};
RateCycle rate_cycle(const FilterChain& chain);

/// Bits that the registers of a CIC need beside those of its input: ceil(log2 of its largest gain), (R M)^N of a
/// decimator and R^(N-1) M^N at the output of an interpolator (Hogenauer 1981). Inside an interpolator the last comb
/// can need more than its output: the largest of the stages' is returned.
int growth_bits(const CicDecimator& design);
int growth_bits(const CicInterpolator& design);

}  // namespace halflsb
