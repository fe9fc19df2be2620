// One stage of integers while its rounding points are found: how the terms and the targets of its sums are written.
// Private to this room.
#pragma once

#include "oracle/arithmetic/sum_points.hpp"

namespace halflsb {

/// Of the words that come into a stage, as far as nothing is clipped.
struct UsedBits {
    int spare = 0;
    double coarsest_step = 0.0;     ///< of all words so far, by the bits that they use
    bool may_lean_to_even = false;  ///< something was rounded half to even
};

/// Spare are the bits of a word's fraction that are always 0: a step that was never reached makes no remainder, and the
/// mean of a rounding hangs on the remainders.
struct StageSums {
    StageSums(const DescribedChain& chain, const ExactChain& exact_chain, std::size_t stage_index,
              const UsedBits& used);
    StageSums(const StageSums&) = delete;
    StageSums& operator=(const StageSums&) = delete;

    const DescribedStage& stage;
    const ExactChain& exact;
    const std::size_t index;
    Word in;              ///< of the section at hand
    int in_spare;         ///< of `in`; once all points are found, of what the stage returns
    bool in_may_lean;     ///< likewise: to even words
    int state_spare = 0;  ///< of stage.state
    int result_bits = 0;  ///< fraction bits that the section at hand returns
    SumPoints sums;

    /// `word` is one of ours, known by its address: in, stage.in.word, stage.state, or stage.out.word of what a section
    /// returned before. Any other has no spare bits.
    int spare_of(const Word& word) const;
    /// To even words.
    bool leans(const Word& word) const;
    /// Words of the state and of what the section returns.
    bool may_lean() const;
    int in_bits() const { return in.fraction_bits - in_spare; }
    /// What is returned uses so many fraction bits: in_spare of whatever comes next.
    void set_spare_out(int bits);
    /// And result_bits. Coefficients of the section at hand.
    void find_spare_of_state(const std::vector<double>& forward, const std::vector<double>& fed_back);
    /// Fraction bits that products of these coefficients and words of so many can have.
    int bits_of_products(const std::vector<double>& coefficients, int word_bits) const;

    Term whole(const Word& word) const;
    Term term(double coefficient, const Word& word) const;
    Term feedback(double a, const Word& word) const;

    FilterChain exact_up_to(std::size_t stage_end) const;
    SumTarget behind(std::string what) const;
    SumTarget at_section(std::string what, std::size_t section, RoundingPoint::Place place) const;
    /// From state words to output words.
    void add_output(std::size_t section);
};

}  // namespace halflsb
