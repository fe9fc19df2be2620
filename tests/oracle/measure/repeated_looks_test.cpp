#include "oracle/measure/repeated_looks.hpp"

#include <catch2/catch.hpp>

#include "oracle/measure/response_estimate.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

TEST_CASE("repeated looks: the record grows by a quarter between looks, and the last look is at the budget",
          "[measure]") {
    const RepeatedLooks looks(1024, 64, 100000);
    const auto& at = looks.at_samples();
    REQUIRE(at.size() > 2);
    CHECK(at.front() == 1024);
    CHECK(at.back() == 100000);
    for (std::size_t i = 1; i < at.size(); ++i) {
        CHECK(at[i] > at[i - 1]);
        // A quarter, rounded up to whole steps; the last may be cut by the budget.
        CHECK(at[i] - at[i - 1] <= at[i - 1] / 4 + 64);
        if (i + 1 < at.size()) CHECK(4 * (at[i] - at[i - 1]) >= at[i - 1]);
        if (i + 1 < at.size()) CHECK((at[i] - 1024) % 64 == 0);
    }
    // ln(100000 / 1024) / ln 1.25 = 20.5, and the first and the last.
    CHECK(at.size() <= 22);
}

TEST_CASE("repeated looks: shares of all looks add up to the probability", "[measure]") {
    for (const std::int64_t budget : {100, 1024, 1025, 50000, 1000000000}) {
        const RepeatedLooks looks(1024, 64, budget);
        CHECK(looks.share_of(1e-6) * static_cast<double>(looks.at_samples().size()) == Approx(1e-6));
        CHECK(looks.at_samples().back() == budget);
    }
    CHECK(RepeatedLooks(1024, 64, 100).at_samples().size() == 1);
}

TEST_CASE("repeated looks: the fixed length is that of the normal test", "[measure]") {
    // z of 1e-6 is 4.7534243, of 1e-3 3.0902323 (SciPy, COMPUTED): (7.8436566)^2 = 61.522949 for delta = one deviation.
    CHECK(fixed_length_samples(1e-6, 1e-3, 1.0, 1.0, 1.0) == Approx(61.522949).epsilon(1e-6));
    // Twice the spread takes four times as many, and so does half the delta.
    CHECK(fixed_length_samples(1e-6, 1e-3, 0.5, 2.0, 1.0) == Approx(16.0 * 61.522949).epsilon(1e-6));
    CHECK(fixed_length_samples(1e-6, 1e-3, 1.0, 1.0, 500.0) == Approx(500.0 * 61.522949).epsilon(1e-6));
}

namespace {

// A gain that must be at most `limit`, looked at again and again until it is surely above, or surely below limit +
// delta. delta is such that the test of one length needs `fixed_parts`.
struct Tested {
    double wrong = 0.0, undecided = 0.0, parts = 0.0;
};

Tested test_at(double true_shift_in_delta, double alpha, double beta, int runs, std::uint64_t seed) {
    // Far above the noise, so that what stands across the gain says nothing (its bound has tests of its own).
    constexpr double limit = 1000.0, fixed_parts = 100.0;
    const double delta = std::sqrt(fixed_length_samples(alpha, beta, 1.0, 1.0, 1.0) / fixed_parts);
    const RepeatedLooks looks(8, 1, 800);
    Gaussian normal(seed);
    Tested tested;
    for (int run = 0; run < runs; ++run) {
        BatchSums sums(1);
        bool is_above = false, is_below = false;
        std::int64_t part = 0;
        for (const std::int64_t look : looks.at_samples()) {
            for (; part < look; ++part) {
                const std::complex<double> cross(true_shift_in_delta * delta + normal.next(), normal.next());
                const double power = 1.0;
                sums.add(std::span(&cross, 1), std::span(&power, 1));
            }
            const ResponseEstimate estimate = estimate_of(ResponseSums{{0.25}, sums, part, 1.0, 0.0, 0.0}, 0);
            is_above = gain_surely_above(limit, estimate, looks.share_of(alpha)) > limit;
            is_below = gain_surely_below(limit, estimate, looks.share_of(beta)) < limit + delta;
            if (is_above || is_below) break;
        }
        tested.wrong += (true_shift_in_delta <= 0.0 ? is_above : is_below) / static_cast<double>(runs);
        tested.undecided += (!is_above && !is_below) / static_cast<double>(runs);
        tested.parts += static_cast<double>(part) / fixed_parts / static_cast<double>(runs);
    }
    return tested;
}

}  // namespace

TEST_CASE("repeated looks: at the limit and delta beyond, wrong answers stay within alpha and beta", "[measure]") {
    const int runs = test::rounds_of(10000);
    // The count that a binomial of 0.01 exceeds with a probability of 1e-6: 151 of 10,000, 28 of 1,000 (SciPy,
    // COMPUTED).
    const double most = runs == 10000 ? 0.0151 : 0.028;
    const Tested on_the_limit = test_at(0.0, 0.01, 0.01, runs, 31), beyond = test_at(1.0, 0.01, 0.01, runs, 32);
    CHECK(on_the_limit.wrong <= most);
    CHECK(beyond.wrong <= most);
    // Not by refusing to answer.
    CHECK(on_the_limit.undecided < 0.001);
    CHECK(beyond.undecided < 0.001);
    // And not by never being wrong: a share that is spent ten times too carefully would take too long.
    CHECK(on_the_limit.wrong > 0.001);
    CHECK(beyond.wrong > 0.001);
}

TEST_CASE("repeated looks: on average they take less than half of the samples of the fixed length", "[measure]") {
    const int runs = test::rounds_of(1000);
    const auto [alpha, beta] = GENERATE(std::pair(1e-6, 1e-3), std::pair(1e-2, 1e-2));
    const double inside = test_at(-1.0, alpha, beta, runs, 33).parts, on = test_at(0.0, alpha, beta, runs, 34).parts,
                 outside = test_at(1.0, alpha, beta, runs, 35).parts;
    INFO("inside " << inside << ", on the limit " << on << ", outside " << outside << " of the fixed length");
    CHECK((inside + on + outside) / 3.0 < 0.5);
    CHECK(inside < on);
    CHECK(on < 0.75);
    CHECK(outside < 0.75);
}
