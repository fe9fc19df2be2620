// What a plan allows of wrong answers, and a measured figure against a limit under it.
//
// alpha is the chance that a right board fails anywhere in the whole check: it is shared in equal parts by all rules
// whose figures are uncertain, case by case and channel by channel (Bonferroni), and a judge shares its part over its
// figures. beta is the chance that one figure which lies beyond its limit and its zone passes; it is not shared.
#pragma once

#include <string>

#include "oracle/judge/verdict.hpp"
#include "oracle/measure/figure.hpp"

namespace halflsb {

struct Plan;

/// Probabilities in (0, 0.5); the confidence of intervals that are only told in (0.5, 1).
struct Certainty {
    double alpha = 1e-6;
    double beta = 1e-3;
    double confidence = 0.95;
};

/// Of figures that are random: response, tone ... The others are exact facts of the capture.
bool is_uncertain(const Rule& rule);

/// What one rule on one channel may spend.
struct ErrorShares {
    double alpha = 0.0, beta = 0.0;
    /// For each of so many figures, or looks at one.
    ErrorShares alpha_over(std::size_t count) const { return {alpha / static_cast<double>(count), beta}; }
    ErrorShares over_looks(std::size_t count) const {
        return {alpha / static_cast<double>(count), beta / static_cast<double>(count)};
    }
};
ErrorShares shares_of_rule(const Plan& plan);

/// One side of a limit.
struct FigureLimit {
    double limit = 0.0;
    bool at_least = false;
    /// Indifference: how far beyond the limit a true value may lie and still be told either way. 0: what lies near the
    /// limit stays undecided.
    double zone = 0.0;
    /// How far the figure may lie off that is no noise, however sure it is: as much farther off is a fail, as much
    /// nearer a pass.
    double bound = 0.0;
};

/// Fails when the true value surely (alpha) lies beyond the limit; passes when it surely (beta) does not lie beyond the
/// zone; else it is undecided. An estimate with `degrees` of freedom of its uncertainty, infinite where that is known.
/// A value or uncertainty that is no number is undecided.
JudgedFigure decided(std::string name, const Figure& measured, double degrees, const FigureLimit& limit,
                     std::string unit, const ErrorShares& shares);

}  // namespace halflsb
