// A described chain in the pieces that sum: each fir, moving average, comb and section for itself, with the words
// around it. Private to this room.
#pragma once

#include "oracle/arithmetic/exact_chain.hpp"
#include "oracle/filters/node_path.hpp"

namespace halflsb {

struct ChainElement {
    const DescribedStage* stage = nullptr;  ///< of the chain given
    std::size_t stage_index = 0;            ///< of the description
    FilterNode node = {};                   ///< in the exact chain
    FilterChain exact = {};                 ///< of this element alone
    Word in = {};
    bool is_last_of_stage = true, is_last = true;
    std::string name;  ///< "stage 1, section 2"
    /// Of a section or a recursion: b0 b1 ..., a1 a2 ...; else empty.
    std::vector<double> forward = {}, feedback = {};

    bool has_sums() const { return !forward.empty(); }
    bool is_recursive() const;  ///< its past results come back
    /// 1 / A(z), of a section or a recursion.
    FilterChain loop() const;
    const Comb* comb() const { return std::get_if<Comb>(&exact.front().design); }
    bool is_integer() const { return stage->number == NumberKind::integer; }
    /// What is fed back is held in state words, and only once a sample: direct-1, and the one-poles.
    bool holds_one_state() const;
    /// No feedback but a1, or a comb: a clipped state is a contraction of any error.
    bool is_first_order() const;
    /// Words that the results leave in: of the stage; wide between sections with rounding_at output.
    bool shortens_to_output() const;
};

std::vector<ChainElement> chain_elements(const DescribedChain& chain, const ExactChain& exact);

}  // namespace halflsb
