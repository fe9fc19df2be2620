#include "oracle/judge/certainty.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "oracle/judge/plan.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using testing::Gaussian;
using testing::is_binomial;

namespace {

constexpr double infinite = std::numeric_limits<double>::infinity();

JudgedFigure at_most_one(double value, double uncertainty, double degrees, const ErrorShares& shares,
                         double zone = 0.0) {
    return decided("figure", {value, uncertainty}, degrees, {1.0, false, zone}, "dB", shares);
}

}  // namespace

TEST_CASE("certainty: between surely beyond and surely within nothing is said", "[judge]") {
    // One-sided normal quantiles: 3.0902 at 1e-3, 4.7534 at 1e-6 (tables of the normal distribution, from memory).
    const ErrorShares shares{1e-6, 1e-3};
    CHECK(at_most_one(1.0 + 0.4752, 0.1, infinite, shares).verdict == Verdict::undecided);
    CHECK(at_most_one(1.0 + 0.4755, 0.1, infinite, shares).verdict == Verdict::fail);
    CHECK(at_most_one(1.0 - 0.3089, 0.1, infinite, shares).verdict == Verdict::undecided);
    CHECK(at_most_one(1.0 - 0.3091, 0.1, infinite, shares).verdict == Verdict::pass);
    // The zone moves what passes, never what fails.
    CHECK(at_most_one(1.0 + 0.19, 0.1, infinite, shares, 0.5).verdict == Verdict::pass);
    CHECK(at_most_one(1.0 + 0.20, 0.1, infinite, shares, 0.5).verdict == Verdict::undecided);
    CHECK(at_most_one(1.0 + 0.4755, 0.1, infinite, shares, 0.5).verdict == Verdict::fail);
    // Few degrees of freedom: 3 have t = 10.2145 at 1e-3 (tables of Student's t, from memory).
    CHECK(at_most_one(1.0 - 1.021, 0.1, 3.0, shares).verdict == Verdict::undecided);
    CHECK(at_most_one(1.0 - 1.022, 0.1, 3.0, shares).verdict == Verdict::pass);
}

TEST_CASE("certainty: a bound stands beside the quantile and is not widened by it", "[judge]") {
    const ErrorShares shares{1e-6, 1e-3};
    const auto at = [&](double value, double uncertainty, double bound) {
        return decided("figure", {value, uncertainty, bound}, infinite, {1.0, false, 0.0}, "%", shares);
    };
    for (const double u : {0.0, 0.1}) {
        CHECK(at(1.0 + 0.5 + 4.752 * u - 1e-6, u, 0.5).verdict == Verdict::undecided);
        CHECK(at(1.0 + 0.5 + 4.755 * u + 1e-6, u, 0.5).verdict == Verdict::fail);
        CHECK(at(1.0 - 0.5 - 3.089 * u + 1e-6, u, 0.5).verdict == Verdict::undecided);
        CHECK(at(1.0 - 0.5 - 3.091 * u - 1e-6, u, 0.5).verdict == Verdict::pass);
    }
    // Told as the standard uncertainty of a rectangular one.
    CHECK(*at(0.0, 0.0, 0.5).uncertainty == judged(0.5 / std::sqrt(3.0)));
    CHECK(*at(0.0, 0.3, 0.4 * std::sqrt(3.0)).uncertainty == Approx(0.5));
    CHECK(at(0.0, 0.0, infinite).note == "how sure it is, is not known");
}

TEST_CASE("certainty: a figure without uncertainty is decided by its value alone", "[judge]") {
    const ErrorShares shares{1e-6, 1e-3};
    for (const double degrees : {infinite, 3.0, 0.0}) {
        CHECK(at_most_one(1.0, 0.0, degrees, shares).verdict == Verdict::pass);
        CHECK(at_most_one(1.00000001, 0.0, degrees, shares).verdict == Verdict::fail);
    }
    const JudgedFigure least = decided("sinad", {60.0, 0.5}, infinite, {50.0, true, 0.0}, "dB", shares);
    CHECK(least.verdict == Verdict::pass);
    CHECK(least.margin == 10.0);
    CHECK(least.uncertainty == 0.5);
    CHECK(decided("sinad", {40.0, 0.5}, infinite, {50.0, true, 0.0}, "dB", shares).verdict == Verdict::fail);
}

TEST_CASE("certainty: what is no number, or of unknown uncertainty, is undecided and says so", "[judge]") {
    const ErrorShares shares{1e-6, 1e-3};
    const double none = std::numeric_limits<double>::quiet_NaN();
    const JudgedFigure no_value = at_most_one(none, 0.1, infinite, shares);
    CHECK(no_value.verdict == Verdict::undecided);
    CHECK_FALSE(no_value.value);
    CHECK(no_value.note == "not a finite number");
    CHECK(at_most_one(infinite, 0.0, infinite, shares).verdict == Verdict::undecided);
    const JudgedFigure unsure = at_most_one(0.5, none, infinite, shares);
    CHECK(unsure.verdict == Verdict::undecided);
    CHECK(unsure.note == "how sure it is, is not known");
    // An uncertainty without degrees of freedom bounds nothing.
    CHECK(at_most_one(-100.0, 0.1, 0.0, shares).verdict == Verdict::undecided);
}

TEST_CASE("certainty: wrong answers are as rare as asked", "[judge]") {
    const int rounds = test::rounds_of(20000);
    const ErrorShares shares{0.01, 0.02};
    Gaussian normal(31);
    int wrong_fails = 0, misses = 0;
    for (int round = 0; round < rounds; ++round) {
        const double noise = 0.1 * normal.next();
        wrong_fails += at_most_one(1.0 + noise, 0.1, infinite, shares).verdict == Verdict::fail;
        misses += at_most_one(1.3 + noise, 0.1, infinite, shares, 0.3).verdict == Verdict::pass;
    }
    CHECK(is_binomial(wrong_fails, rounds, 0.01));
    CHECK(is_binomial(misses, rounds, 0.02));
}

TEST_CASE("certainty: alpha is shared by all uncertain rules of all cases and channels, beta is not", "[judge]") {
    Plan plan;
    plan.certainty = {1e-3, 1e-2, 0.95};
    plan.signal.channels = 2;
    plan.cases.resize(3);
    CHECK(shares_of_rule(plan).alpha == 1e-3);  // nobody asks
    for (Case& the_case : plan.cases) the_case.rules = {{ErrorRule{}, {}}, {LatencyRule{}, {}}, {ResponseRule{}, {}}};
    plan.cases[2].rules.push_back({ExactRule{}, {}});
    CHECK(shares_of_rule(plan).alpha == Approx(1e-3 / 6.0));
    CHECK(shares_of_rule(plan).beta == 1e-2);
    CHECK(shares_of_rule(plan).alpha_over(10).alpha == Approx(1e-3 / 60.0));
    CHECK(shares_of_rule(plan).alpha_over(10).beta == 1e-2);
    CHECK(shares_of_rule(plan).over_looks(10).beta == Approx(1e-3));
}
