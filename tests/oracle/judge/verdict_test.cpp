#include "oracle/judge/verdict.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

using namespace halflsb;

namespace {
RuleVerdict with(Verdict verdict) {
    RuleVerdict made;
    made.verdict = verdict;
    return made;
}
}  // namespace

TEST_CASE("verdict: fail outranks undecided outranks pass, and no rule is a pass", "[judge]") {
    CHECK(verdict_of({}) == CaseVerdict::pass);
    CHECK(verdict_of({with(Verdict::pass)}) == CaseVerdict::pass);
    CHECK(verdict_of({with(Verdict::pass), with(Verdict::undecided)}) == CaseVerdict::undecided);
    CHECK(verdict_of({with(Verdict::undecided), with(Verdict::fail), with(Verdict::pass)}) == CaseVerdict::fail);
}

TEST_CASE("verdict: a judged figure has nine significant digits", "[judge]") {
    CHECK(judged(0.5) == 0.5);
    CHECK(judged(0.50000000049) == 0.5);
    CHECK(judged(0.5000000006) == 0.500000001);
    CHECK(judged(-123456789.4) == -123456789.0);
    CHECK(judged(1.0 / 3.0) == 0.333333333);
    CHECK(judged(0.0) == 0.0);
    // An ulp, as between two machines, is far below the ninth digit.
    const double value = 12.345678949999;
    CHECK(judged(value) == judged(std::nextafter(value, 100.0)));
}

TEST_CASE("verdict: rounding to nine digits keeps NaN and infinity", "[judge]") {
    CHECK(std::isnan(judged(std::numeric_limits<double>::quiet_NaN())));
    CHECK(judged(std::numeric_limits<double>::infinity()) == std::numeric_limits<double>::infinity());
}
