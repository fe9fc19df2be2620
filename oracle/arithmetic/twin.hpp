// The filter in the declared arithmetic, to the bit: codes in, codes out (docs/arithmetic.md).
//
// A twin knows no fault. Any split into blocks gives the same codes. Sums are exact in 128 bits before they are held
// in their words, so no description overflows the twin itself.
#pragma once

#include <cstdint>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

/// The largest numbers that a node has reached since the reset, before its overflow.
struct NodeReach {
    std::string name;  ///< "stage 1, section 2, state"
    Word word;
    double lowest = 0.0, highest = 0.0;  ///< as values
    std::int64_t overflows = 0;          ///< how many numbers were beyond the ends of the word
};

class Twin {
public:
    virtual ~Twin() = default;
    virtual void reset() = 0;
    /// How many outputs the next `inputs` samples will give.
    virtual std::size_t outputs_for(std::size_t inputs) const { return inputs; }
    /// Codes of the input format to codes of the output format; out.size() == outputs_for(in.size()).
    virtual void process(std::span<const Code> in, std::span<Code> out) = 0;
    /// Everything that the next output depends on, in a fixed order: two twins of one description with equal states
    /// return the same from then on.
    virtual std::vector<std::int64_t> state() const = 0;
    /// Takes what state() gave. False, and the twin is reset, for what no state can be: the wrong number of words, one
    /// beyond the ends of its word.
    virtual bool set_state(std::span<const std::int64_t> words) = 0;
    /// Accumulators, states and outputs, in the order of the signal.
    virtual std::vector<NodeReach> reaches() const = 0;
};

/// nullptr where the description is incomplete (`missing`), and of what no bits are defined for: a CIC in float32, a sum
/// that nobody limited and that can need more than 126 bits (a wide accumulator of products of two words of 64), a CIC
/// whose registers need more than 64.
std::unique_ptr<Twin> make_twin(const DescribedChain& chain);

}  // namespace halflsb
