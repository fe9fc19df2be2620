// The coefficients of a stage as it stores them, on their way into a plan of sums.
#pragma once

#include "oracle/arithmetic/stage_twin.hpp"

namespace halflsb {

/// b times a word of `multiplied`.
PlannedTerm forward_term(const DescribedStage& stage, double b, const Word& multiplied);
/// The feedback by `a` of the design, whose product the design subtracts.
PlannedTerm feedback_term(const DescribedStage& stage, double a, const Word& multiplied);
/// That of a section; of a one-pole, which stores b0 alone, its 1 - b0.
std::vector<PlannedTerm> feedback_terms(const DescribedStage& stage, const Recurrence& section, const Word& multiplied);
/// A word as a product by 1.
PlannedTerm whole_term(const Word& word);

/// A sum of `terms` that goes to words of `target`; its accumulator as described.
SumPlan plan_of(const DescribedStage& stage, std::string name, std::vector<PlannedTerm> terms, const Word& target);

}  // namespace halflsb
