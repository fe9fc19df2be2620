#include "oracle/rules/exact_rule.hpp"

namespace halflsb {

const Recipe& exact_recipe() {
    static const Recipe recipe{
        "exact",
        "The response equals what the declared arithmetic returns, bit for bit; needs all of it said "
        "(docs/arithmetic.md).",
        {}};
    return recipe;
}

Outcome<ExactRule> make_exact_rule(const ParameterValues&, const RuleContext&) { return ExactRule{}; }

}  // namespace halflsb
