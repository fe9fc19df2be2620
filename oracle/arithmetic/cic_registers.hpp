// The registers of a CIC: how wide they are, which low bits they no longer have, and which way to the output an error
// at each of them takes.
//
// E. B. Hogenauer, "An economical class of digital filters for decimation and interpolation", 1981. Registers that wrap
// lose nothing as long as all of them end at one top bit and the last one holds what is returned. Of a decimator the
// low bits are worth ever less on the way: register j (integrators, then combs, from 1) may be without the B_j lowest
// ones, counted from the LSB of the input, B_1 <= B_2 <= ... Private to oracle and the papers of runner.
#pragma once

#include <string>
#include <vector>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

struct CicRegister {
    std::string name;        ///< "integrator 1"
    int discarded_bits = 0;  ///< B_j
    Word word;               ///< wide_bits: nobody said how wide
    int bits_needed = 0;     ///< so that the last one holds what it returns, with the errors of what was discarded
};

/// j counts the integrators from 1, then the combs.
std::string name_of_cic_register(int order, int j);

/// Integrators and combs in the order of the signal. Empty for a stage that is no CIC, for float32, and for words that
/// come in as wide as it takes.
std::vector<CicRegister> cic_registers(const DescribedStage& stage);

/// The width of a register without discards: as said, or what is needed.
int cic_register_bits(const DescribedStage& stage);

/// Too narrow registers, discards that do not go together. An Error's place is the word to blame.
std::optional<Error> registers_that_cannot_be(const DescribedStage& stage);

/// From the input of register j (from 1) of a decimator to what it returns: for an error made there. For j above N at
/// the rate of the output.
FilterChain path_from_register(const CicDecimator& design, int j);

/// Hogenauer's rule (his equation 21): discards B_1 .. B_2N whose errors together have at most the variance of the
/// output's own rounding, for outputs that are whole multiples of `output_lsb` of the input's. None is below 0.
std::vector<int> hogenauer_discards(const CicDecimator& design, double output_lsb);

}  // namespace halflsb
