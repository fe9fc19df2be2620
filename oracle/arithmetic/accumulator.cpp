#include "oracle/arithmetic/accumulator.hpp"

#include <algorithm>

namespace halflsb {

double largest_number(const Word& word) { return std::ldexp(1.0, word.bits - 1); }

double SumPlan::largest_sum() const {
    double largest = 0.0;
    if (saves_fraction) largest += std::ldexp(1.0, accumulator.fraction_bits - target.fraction_bits);
    for (const PlannedTerm& term : terms) {
        const double product = std::fabs(static_cast<double>(term.coefficient)) * term.largest_word;
        largest += std::ldexp(product, accumulator.fraction_bits - term.fraction_bits) + 1.0;
    }
    return largest;
}

double SumPlan::largest() const {
    const double sum = largest_sum();
    const double shortened = std::ldexp(sum, target.fraction_bits - accumulator.fraction_bits);
    double most = 0.0;
    for (const PlannedTerm& term : terms) {
        most = std::max(most, std::fabs(static_cast<double>(term.coefficient)) * term.largest_word);
    }
    // Words of 64 bits and less take part of what does not fit to the same number as all of it.
    const auto in_word = [](double number, const Word& word) {
        return word.bits <= 64 && number > 0x1p65 ? 0x1p65 : number;
    };
    return std::max({most, in_word(sum, accumulator), in_word(shortened, target)});
}

}  // namespace halflsb
