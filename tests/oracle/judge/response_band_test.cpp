// What decides a band: error rates, and how early. Simulated parts of a response, so that there can be many checks.
#include "oracle/judge/response_band.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "oracle/measure/repeated_looks.hpp"
#include "tests/oracle/measure/gaussian.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using testing::Gaussian;

namespace {

using Complex = std::complex<double>;

constexpr double zone_db = 0.1;

ResponseRule rule_of(std::optional<double> min_db, std::optional<double> max_db) {
    ResponseRule rule;
    rule.bands = {{10.0, 60.0, min_db, max_db}};
    rule.delta_db = zone_db;
    return rule;
}

double ratio_of(double db) { return std::pow(10.0, db / 20.0); }

/// A part of a response at some points: a stimulus of unit power, and what a board of this gain adds to a design of 1,
/// under noise of this deviation a part.
void add_part(ResponseSums& sums, double gain, double deviation, Gaussian& normal) {
    std::vector<Complex> cross;
    std::vector<double> power;
    for (std::size_t i = 0; i < sums.sums.points(); ++i) {
        const Complex x(normal.next() * std::sqrt(0.5), normal.next() * std::sqrt(0.5));
        const Complex noise(normal.next() * deviation, normal.next() * deviation);
        cross.push_back(((gain - 1.0) * x + noise) * std::conj(x));
        power.push_back(std::norm(x));
    }
    sums.sums.add(cross, power);
    ++sums.averages;
}

struct Checked {
    Verdict verdict;
    std::int64_t parts;
};

/// One check of a board, look by look, within the budget.
Checked check(const ResponseRule& rule, double gain_db, double deviation, std::int64_t budget, ErrorShares shares,
              Gaussian& normal) {
    ResponseSums sums{{0.1}, BatchSums(1)};
    BandDecision decision(rule, rule.bands[0], {{0, 20.0, 1.0}});
    const RepeatedLooks looks(16, 1, budget);
    std::int64_t parts = 0;
    for (const std::int64_t at : looks.at_samples()) {
        for (; parts < at; ++parts) add_part(sums, ratio_of(gain_db), deviation, normal);
        decision.look(sums, shares.over_looks(looks.at_samples().size()));
        if (decision.verdict() != Verdict::undecided) break;
    }
    return {decision.verdict(), parts};
}

/// Whether so many of `rounds` are within a chance by the exact binomial test at 1e-6, one-sided.
bool within(int count, int rounds, double chance) {
    double above = 0.0;
    for (int k = count; k <= rounds; ++k) {
        above += std::exp(std::lgamma(rounds + 1.0) - std::lgamma(k + 1.0) - std::lgamma(rounds - k + 1.0) +
                          k * std::log(chance) + (rounds - k) * std::log1p(-chance));
    }
    return above > 1e-6;
}

}  // namespace

TEST_CASE("response band: wrong fails on the limit and misses at delta are as rare as asked", "[judge]") {
    const int rounds = test::rounds_of(10000);
    const ErrorShares shares{1e-2, 1e-2};
    Gaussian normal(41);
    const double deviation = 0.05;
    int wrong_max = 0, wrong_min = 0, missed_max = 0, missed_min = 0, found = 0;
    for (int round = 0; round < rounds; ++round) {
        wrong_max += check(rule_of({}, -1.0), -1.0, deviation, 1200, shares, normal).verdict == Verdict::fail;
        wrong_min += check(rule_of(-1.0, {}), -1.0, deviation, 1200, shares, normal).verdict == Verdict::fail;
        const Verdict above = check(rule_of({}, -1.0), -1.0 + zone_db, deviation, 1200, shares, normal).verdict;
        missed_max += above == Verdict::pass;
        found += above == Verdict::fail;
        missed_min +=
            check(rule_of(-1.0, {}), -1.0 - zone_db, deviation, 1200, shares, normal).verdict == Verdict::pass;
    }
    CHECK(within(wrong_max, rounds, 1e-2));
    CHECK(within(wrong_min, rounds, 1e-2));
    CHECK(within(missed_max, rounds, 1e-2));
    CHECK(within(missed_min, rounds, 1e-2));
    // The test has power: a board that is delta off does not stay undecided.
    CHECK(found > 0.95 * rounds);
}

TEST_CASE("response band: at the defaults delta is found in 995 of 1000, twice delta always", "[judge]") {
    const int rounds = test::rounds_of(1000);
    const ErrorShares shares{1e-6, 1e-3};
    Gaussian normal(42);
    int at_delta = 0, at_two = 0;
    for (int round = 0; round < rounds; ++round) {
        at_delta += check(rule_of({}, 0.0), zone_db, 0.05, 3000, shares, normal).verdict == Verdict::fail;
        at_two += check(rule_of({}, 0.0), 2.0 * zone_db, 0.05, 3000, shares, normal).verdict == Verdict::fail;
    }
    CHECK(at_delta >= 0.995 * rounds);
    CHECK(at_two == rounds);
}

TEST_CASE("response band: the decision takes at most half of a fixed length in the mean", "[judge]") {
    const int rounds = test::rounds_of(400);
    const ErrorShares shares{1e-6, 1e-3};
    Gaussian normal(43);
    const double deviation = 0.05, delta = ratio_of(zone_db) - 1.0;
    // A part of unit mean power: the deviation of the gain after n of them is deviation / sqrt(n).
    const double fixed = fixed_length_samples(shares.alpha, shares.beta, delta, deviation, 1.0);
    double mean = 0.0;
    for (const double gain_db : {-zone_db, 0.0, 2.0 * zone_db}) {
        double parts = 0.0;
        for (int round = 0; round < rounds; ++round)
            parts += static_cast<double>(check(rule_of({}, 0.0), gain_db, deviation, 3000, shares, normal).parts);
        mean += parts / rounds / fixed / 3.0;
        UNSCOPED_INFO("at " << gain_db << " dB: " << parts / rounds / fixed << " of a fixed length");
    }
    CHECK(mean < 0.5);
}

TEST_CASE("response band: the figure shows the point that decides, and says where nothing is known", "[judge]") {
    Gaussian normal(44);
    ResponseSums sums{{0.1, 0.2, 0.3}, BatchSums(3)};
    for (int part = 0; part < 64; ++part) add_part(sums, ratio_of(-0.02), 0.001, normal);
    const ResponseRule rule = rule_of(-0.5, 0.5);
    // The design halves at the second point and is louder at the third: only it fails.
    BandDecision decision(rule, rule.bands[0], {{0, 20.0, 1.0}, {1, 30.0, 1.02}, {2, 40.0, 1.2}});
    CHECK(decision.decisions() == 6);
    CHECK(decision.verdict() == Verdict::undecided);
    decision.look(sums, {1e-6, 1e-3});
    CHECK(decision.verdict() == Verdict::fail);
    const auto figures = decision.figures(sums);
    REQUIRE(figures.size() == 2);
    CHECK(figures[0].verdict == Verdict::pass);
    CHECK(figures[0].note == "at 20 Hz");
    CHECK(figures[0].uncertainty.value() < 0.01);
    CHECK(figures[1].verdict == Verdict::fail);
    CHECK(figures[1].note == "at 40 Hz");
    CHECK(figures[1].value.value() == Approx(20.0 * std::log10(1.2 + ratio_of(-0.02) - 1.0)).margin(0.01));
    CHECK(decision.open(sums, 64.0, {1e-6, 1e-3}).gains == 0);

    // A NaN anywhere is no gain: nothing is decided by it, and nothing hides it.
    std::vector<Complex> cross(3, 0.0);
    cross[1] = std::numeric_limits<double>::quiet_NaN();
    sums.sums.add(cross, std::vector<double>(3, 1.0));
    BandDecision spoilt(rule, rule.bands[0], {{0, 20.0, 1.0}, {1, 30.0, 1.0}});
    spoilt.look(sums, {1e-6, 1e-3});
    CHECK(spoilt.verdict() == Verdict::undecided);
    CHECK(spoilt.open(sums, 65.0, {1e-6, 1e-3}).is_not_a_number);
    const auto none = spoilt.figures(sums);
    CHECK_FALSE(none[0].value);
    CHECK(none[0].note == "at 30 Hz, the response is not a number");
}
