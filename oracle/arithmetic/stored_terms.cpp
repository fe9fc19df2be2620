#include "oracle/arithmetic/stored_terms.hpp"

namespace halflsb {

PlannedTerm forward_term(const DescribedStage& stage, double b, const Word& multiplied) {
    return {stored_coefficient(stage, b), stage.coefficient_fraction_bits + multiplied.fraction_bits,
            largest_number(multiplied), false};
}

PlannedTerm feedback_term(const DescribedStage& stage, double a, const Word& multiplied) {
    PlannedTerm term = forward_term(stage, 0.0, multiplied);
    term.subtracted = stage.feedback_coefficients == FeedbackCoefficients::subtracted;
    term.coefficient = stored_coefficient(stage, term.subtracted ? a : -a);
    return term;
}

std::vector<PlannedTerm> feedback_terms(const DescribedStage& stage, const Recurrence& section,
                                        const Word& multiplied) {
    std::vector<PlannedTerm> terms;
    for (const double a : section.feedback) terms.push_back(feedback_term(stage, a, multiplied));
    if (section.is_one_pole) {
        const std::int64_t one = std::int64_t{1} << stage.coefficient_fraction_bits;
        const std::int64_t pole = one - stored_coefficient(stage, section.forward.front());
        terms.front().coefficient = terms.front().subtracted ? -pole : pole;
    }
    return terms;
}

PlannedTerm whole_term(const Word& word) { return {1, word.fraction_bits, largest_number(word), false}; }

SumPlan plan_of(const DescribedStage& stage, std::string name, std::vector<PlannedTerm> terms, const Word& target) {
    int fraction_bits = terms.front().fraction_bits;
    for (const PlannedTerm& term : terms) fraction_bits = std::max(fraction_bits, term.fraction_bits);
    const Word accumulator{stage.accumulator_bits,
                           accumulator_fraction_bits_of(stage, fraction_bits, target.fraction_bits),
                           stage.accumulator_overflow};
    return {.name = std::move(name),
            .accumulator = accumulator,
            .product_rounding = stage.rounding,
            .sum_rounding = stage.rounding,
            // Of a sum that is not shortened nothing is left.
            .saves_fraction = stage.fraction_saving && accumulator.fraction_bits > target.fraction_bits,
            .constant_eighths = stage.sum_constant_eighths,
            .target = target,
            .terms = std::move(terms)};
}

}  // namespace halflsb
