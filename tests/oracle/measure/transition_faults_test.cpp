#include <algorithm>
#include <limits>

#include "tests/oracle/measure/gaussian.hpp"
#include "tests/oracle/measure/transition_records.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

TEST_CASE("transition: a level within an LSB of a state has no instant", "[measure]") {
    // 8 codes: 10 % is 0.8 LSB, 90 % is 7.2 of 8, the band of 2 % 0.16 LSB; 50 % is well inside.
    const auto record = record_of([](double n) { return std::floor(std::min(n * 0.125, 8.0)); }, 200);
    auto question = question_of({0, 8});
    question.lsb = 1.0;
    const auto f = figures_of(question, record);
    CHECK(fault_of(f.low_instant) == TransitionFault::too_coarse);
    CHECK(fault_of(f.high_instant) == TransitionFault::too_coarse);
    CHECK(fault_of(f.duration_samples) == TransitionFault::too_coarse);
    CHECK(fault_of(f.settling_samples) == TransitionFault::too_coarse);
    // floor(n / 8) goes from 3 to 4 between n = 31 and 32, from 2 to 3 and from 4 to 5 eight samples away
    CHECK(value(f.mid_instant) == 32.0);
    CHECK(uncertainty(f.mid_instant) == 8.0);
    CHECK(value(f.final_value) == 8.0);
}

TEST_CASE("transition: what cannot be said has its reason, and the rest is said", "[measure]") {
    const auto rise = [](double n) { return -std::expm1(-n / 50.0); };
    SECTION("it never reaches 90 %") {
        const auto f = figures_of(question_of(), record_of([&](double n) { return 0.85 * rise(n); }, 2000));
        CHECK(fault_of(f.high_instant) == TransitionFault::never_reaches);
        CHECK(fault_of(f.duration_samples) == TransitionFault::never_reaches);
        CHECK(fault_of(f.settling_samples) == TransitionFault::not_settled);
        CHECK(value(f.mid_instant) > 0.0);
        CHECK(value(f.final_value) == Approx(0.85).margin(1e-6).epsilon(0));
    }
    SECTION("it never moves") {
        const auto f = figures_of(question_of(), record_of([](double) { return 0.0; }, 2000));
        for (const auto& figure : {f.low_instant, f.mid_instant, f.high_instant, f.duration_samples,
                                   f.overshoot_percent, f.preshoot_percent, f.settling_samples}) {
            CHECK(fault_of(figure) == TransitionFault::never_reaches);
        }
        CHECK(value(f.final_value) == 0.0);
    }
    SECTION("it stands beyond from the start") {
        const auto f = figures_of(question_of(), record_of([](double) { return 1.0; }, 200, {1.0, 1.0}));
        CHECK(fault_of(f.mid_instant) == TransitionFault::starts_beyond);
        auto offset = record_of(rise, 800);
        for (double& sample : offset) sample = std::max(sample, 0.2);
        CHECK(fault_of(figures_of(question_of(), offset).low_instant) == TransitionFault::starts_beyond);
        CHECK(value(figures_of(question_of(), offset).high_instant) > 100.0);
    }
    SECTION("the record ends before it settles, and while it moves") {
        // Settled to 2 % after 196 samples, to 0.1 % after 345. A quarter of 300 begins at 225, of 250 at 187.5.
        CHECK(figures_of(question_of(), record_of(rise, 300)).settling_samples.figure);
        const auto f = figures_of(question_of(), record_of(rise, 250));
        CHECK(fault_of(f.settling_samples) == TransitionFault::not_settled);
        CHECK(figures_of(question_of(), record_of(rise, 300)).final_value.figure);
        // Halves of a quarter of 120: exp(-97/50) - exp(-112/50) = 3.7 % apart.
        CHECK(fault_of(figures_of(question_of(), record_of(rise, 120)).final_value) == TransitionFault::still_moving);
    }
    SECTION("a ring that happens to end inside the band has not settled") {
        auto ring = record_of([](double n) { return 1.0 + 0.5 * std::sin(0.01 * n); }, 2000);
        ring.resize(static_cast<std::size_t>(before) + 1888);  // 0.01 n = 6 pi + 0.03
        CHECK(fault_of(figures_of(question_of(), ring).settling_samples) == TransitionFault::not_settled);
    }
    SECTION("NaN and infinity, anywhere") {
        for (const double bad : {std::numeric_limits<double>::quiet_NaN(), std::numeric_limits<double>::infinity()}) {
            for (const std::size_t at : {0u, 70u, 863u}) {
                auto record = record_of(rise, 800);
                record[at] = bad;
                CHECK(fault_of(question_of(), record) == TransitionFault::not_finite);
            }
            CHECK(fault_of(question_of({0, bad}), record_of(rise, 800)) == TransitionFault::not_finite);
        }
    }
    SECTION("no two levels") {
        CHECK(fault_of(question_of({1, 1}), record_of(rise, 800)) == TransitionFault::no_transition);
        auto question = question_of();
        question.levels.reset();
        CHECK(fault_of(question, std::vector<double>(100, 0.5)) == TransitionFault::no_transition);
    }
    SECTION("too few samples and too many") {
        auto question = question_of();
        question.step_index = 16;
        const std::vector<double> zeros(32, 0.0);
        CHECK(fault_of(question, std::span(zeros).first(31)) == TransitionFault::too_short);
        CHECK(fault_of(question, zeros) == TransitionFault::none);
        question.step_index = 17;  // 15 left
        CHECK(fault_of(question, zeros) == TransitionFault::too_short);
        CHECK(fault_of(question_of(), std::vector<double>(transition_most_samples + 1)) == TransitionFault::too_long);
    }
}

TEST_CASE("transition: noise in the final stretch is not a movement", "[measure]") {
    // Means of halves of 32 samples stray by 0.05 sqrt(2 / 32) = 1.25 %, the half band is 0.1 %.
    Gaussian noise(44);
    auto question = question_of();
    question.band_percent = 0.2;
    question.final_samples = 64;
    int given = 0;
    const int rounds = test::rounds_of(300);
    for (int round = 0; round < rounds; ++round) {
        auto record = record_of([](double) { return 1.0; }, 100);
        for (double& sample : record) sample += 0.05 * noise.next();
        const auto f = figures_of(question, record);
        given += f.final_value.figure.has_value();
    }
    // 6 degrees of freedom within the halves: beyond 4 of its deviations in 0.7 % of all rounds: 2 of 300.
    CHECK(given + 4 >= 0.993 * rounds);
}

TEST_CASE("transition: a question out of range is refused", "[measure]") {
    const auto record = record_of([](double n) { return -std::expm1(-n / 50.0); }, 800);
    const auto refused = [&](void (*change)(TransitionQuestion&)) {
        auto question = question_of();
        change(question);
        return fault_of(question, record) == TransitionFault::bad_question;
    };
    CHECK_FALSE(refused([](TransitionQuestion&) {}));
    CHECK(refused([](TransitionQuestion& q) { q.low_percent = 0.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.low_percent = 50.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.high_percent = 50.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.high_percent = 100.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.band_percent = 0.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.band_percent = 50.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.band_percent = std::nan(""); }));
    CHECK(refused([](TransitionQuestion& q) { q.lsb = -1.0; }));
    CHECK(refused([](TransitionQuestion& q) { q.step_index = -1; }));
    CHECK(refused([](TransitionQuestion& q) { q.step_index = before + 800; }));
    CHECK(refused([](TransitionQuestion& q) { q.final_samples = 15; }));
}
