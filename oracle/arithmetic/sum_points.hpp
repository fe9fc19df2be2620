// The rounding points of one sum of products: what its terms drop, and what the sum drops. Private to this room.
#pragma once

#include "oracle/arithmetic/rounding_points.hpp"

namespace halflsb {

/// Of a double other than 0: c is a multiple of 2^-n for the least such n.
int fraction_bits_of(double c);

/// What of a coefficient moves the part that is dropped: without the whole steps, of `step_bits` of fraction, that one
/// step of the word gives.
double moving_part(double coefficient, const Word& word, int step_bits);

/// A product of a sum: stored coefficient times words.
struct Term {
    double coefficient = 1.0;  ///< as a value
    std::int64_t stored = 1;   ///< 1 where nothing says how finely it is stored
    int fraction_bits = 0;     ///< of the product
    Word word = {};            ///< that is multiplied
    int spare_bits = 0;        ///< of its fraction that are always 0
    /// What comes in; a state on its way to the output, of transposed-2; what the section returned before.
    enum class Of { input, state, feedback } of = Of::input;
    bool may_lean_to_even = false;  ///< the words, after a rounding half to even
    bool is_subtracted = false;     ///< after it was shortened, if it was
};

/// Where a sum goes: which words, which rounding, which way to the output.
struct SumTarget {
    std::string what;
    RoundingPoint::Place place = RoundingPoint::Place::behind;
    FilterNode node = {};
    int fraction_bits = 0;
    Rounding rounding = Rounding::floor;
    bool saves_fraction = false;
    bool multiplies_input = true;          ///< its forward products do; those of direct-2's output multiply the state
    FilterChain from_input = {};           ///< to the sum
    FilterChain from_input_of_terms = {};  ///< to what its forward products multiply
    FilterChain from_input_of_state = {};  ///< to the state that it adds
    FilterChain from_input_of_feedback = {};  ///< to what is fed back
    FilterChain remainder = {};               ///< as RoundingPoint has it
};

class SumPoints {
public:
    SumPoints(const DescribedStage& stage, std::size_t stage_index) : stage_(stage), index_(stage_index) {}

    void add_sum(std::vector<Term> terms, const SumTarget& target);
    /// Numbers of so many parts, shortened.
    void add_shortening(const SumTarget& target, RoundedNumbers numbers);
    /// A product that is shortened by itself and then added (sign 1) or subtracted (-1).
    void add_product(const Term& product, const SumTarget& target, double sign);
    /// Named and placed, without an error.
    RoundingPoint point_at(const SumTarget& target) const;

    std::vector<RoundingPoint> points;
    double coarsest_step = 0.0;  ///< of the points that follow

private:
    bool is_known() const { return stage_.rounding_is_said && stage_.coefficients_are_said; }
    std::optional<Rounding> rounding_of(const SumTarget& target) const;
    void add_products(const std::vector<Term>& terms, const SumTarget& target, int accumulator, Term::Of of);
    RoundedNumbers numbers_of(const std::vector<Term>& terms, int accumulator, int target_bits) const;

    const DescribedStage& stage_;
    std::size_t index_;
};

}  // namespace halflsb
