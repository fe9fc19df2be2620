// How long a filter remembers, against sums taken otherwise.
#include "oracle/filters/impulse_run.hpp"
#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

// Sum of |h[n]| from each n on, of the impulse response by the difference equations in 64-bit significands.
std::vector<long double> tails(const FilterChain& chain, std::size_t length) {
    std::vector<long double> h(length, 0.0L);
    h[0] = 1.0L;
    const auto recur = [&](const std::vector<double>& b, const std::vector<double>& a) {
        std::vector<long double> y(length, 0.0L);
        for (std::size_t n = 0; n < length; ++n) {
            for (std::size_t k = 0; k < b.size() && k <= n; ++k) y[n] += static_cast<long double>(b[k]) * h[n - k];
            for (std::size_t k = 1; k < a.size() && k <= n; ++k) y[n] -= static_cast<long double>(a[k]) * y[n - k];
        }
        h = std::move(y);
    };
    for (const FilterStage& each : chain) {
        if (const auto* average = std::get_if<MovingAverage>(&each.design)) {
            recur(std::vector<double>(static_cast<std::size_t>(average->points), 1.0 / average->points), {1.0});
        } else if (const auto* fir = std::get_if<Fir>(&each.design)) {
            recur(fir->taps, {1.0});
        } else if (const auto* cascade = std::get_if<BiquadCascade>(&each.design)) {
            for (const BiquadSection& s : cascade->sections) recur({s.b0, s.b1, s.b2}, {1.0, s.a1, s.a2});
        } else if (const auto* comb = std::get_if<Comb>(&each.design)) {
            std::vector<double> b(static_cast<std::size_t>(comb->delay_samples) + 1, 0.0), a(b);
            b.front() = comb->direct, b.back() += comb->forward;
            a.front() = 1.0, a.back() = comb->feedback;
            recur(b, a);
        }
    }
    long double sum = 0.0L;
    for (std::size_t n = length; n-- > 0;) h[n] = sum += std::fabs(h[n]);
    h.push_back(0.0L);
    return h;
}

FilterChain random_chain(Random& random) {
    FilterChain chain;
    for (std::int64_t stages = random.whole(1, 3); stages > 0; --stages) {
        const auto kind = random.whole(0, 4);
        if (kind == 0) chain.push_back(stage(MovingAverage{static_cast<int>(random.whole(1, 60))}));
        if (kind == 1) chain.push_back(stage(Fir{noise(static_cast<std::size_t>(random.whole(1, 60)), random.bits())}));
        if (kind == 2) {
            const auto shape = static_cast<Shape>(random.whole(0, 2));
            const double f = std::pow(10.0, random.between(-2.0, -0.31)), q = random.between(0.4, 4.0);
            chain.push_back(stage(BiquadCascade{{cookbook(shape, f, q)}}));
        }
        if (kind == 3) {
            const double pole = random.between(-0.98, 0.98);
            chain.push_back(stage(BiquadCascade{{{1.0, random.ratio(), 0.0, -pole, 0.0}}}));
        }
        if (kind == 4) {
            chain.push_back(stage(Comb{static_cast<int>(random.whole(1, 40)), random.ratio(), random.ratio(),
                                       random.between(-0.8, 0.8)}));
        }
    }
    return chain;
}

}  // namespace

TEST_CASE("flush: a finite response is gone after its length less 1, exactly", "[filters]") {
    CHECK(flush_samples({}, 1.0, 0x1p-16) == 0);
    CHECK(flush_samples({stage(MovingAverage{1})}, 1.0, 0x1p-16) == 0);
    CHECK(flush_samples({stage(MovingAverage{16})}, 1.0, 0x1p-16) == 15);
    CHECK(flush_samples({stage(MovingAverage{65536})}, 1.0, 0x1p-17) == 65535);
    CHECK(flush_samples({stage(Fir{{1.0, 0.0, 0.0}})}, 1.0, 0x1p-16) == 0);
    CHECK(flush_samples({stage(Comb{1500, 1.0, 0.5, 0.0})}, 1.0, 0x1p-16) == 1500);
    CHECK(flush_samples({stage(MovingAverage{16}), stage(Fir{{0.5, 0.0, 0.5}}), stage(Comb{10, 1.0, 1.0, 0.0})}, 1.0,
                        0x1p-16) == 15 + 2 + 10);
    for (const std::size_t taps : {1023u, 1024u, 1025u, 2048u, 2049u, 65536u}) {
        CHECK(flush_samples({stage(Fir{std::vector<double>(taps, 0.5)})}, 1.0, 0x1p-16) ==
              static_cast<std::int64_t>(taps) - 1);
    }
}

TEST_CASE("flush: last taps that sum to less than half a step are not waited for", "[filters]") {
    const FilterChain chain{stage(Fir{{1.0, 0.5, 0.01, 0.004, 0.002}})};
    CHECK(flush_samples(chain, 1.0, 0.0021) == 3);
    CHECK(flush_samples(chain, 1.0, 0.002) == 4);  // must be below, not at it
    CHECK(flush_samples(chain, 1.0, 0.0061) == 2);
    CHECK(flush_samples(chain, 1.0, 0.0059) == 3);
    CHECK(flush_samples(chain, 10.0, 0.061) == 2);  // full scale and half step count as a ratio
    CHECK(flush_samples(chain, 1.0, 2.0) == 0);
}

TEST_CASE("flush: a single pole in closed form", "[filters]") {
    // sum over n > N of r^n = r^(N+1) / (1 - r).
    for (const double r : {0.5, 0.9, 0.999, 0.99999, -0.99}) {
        const FilterChain chain{stage(BiquadCascade{{{1.0, 0.0, 0.0, -r, 0.0}}})};
        for (const double half_step : {0x1p-9, 0x1p-16, 0x1p-32}) {
            const double size = std::fabs(r);
            const double least = std::log(half_step * (1.0 - size)) / std::log(size) - 1.0;
            const auto zeros = flush_samples(chain, 1.0, half_step);
            REQUIRE(zeros);
            INFO(r << ", " << half_step << ": " << *zeros << " for " << least);
            CHECK(static_cast<double>(*zeros) > least);
            // The sum is taken for up to 2^-19 of it more: 2e-6 of a time constant.
            CHECK(static_cast<double>(*zeros) < least + 1.0 - 2e-6 / std::log(size));
        }
    }
}

TEST_CASE("flush: an upper bound and the smallest, against sums in 64-bit significands", "[filters]") {
    const std::uint64_t seed = 90210;
    INFO("seed " << seed);
    Random random(seed);
    for (int number = 0; number < 300; ++number) {
        const FilterChain chain = random_chain(random);
        const auto left = tails(chain, 6000);  // the slowest pole of cookbook(0.01, 4) falls to e^-47
        for (const double half_step : {0x1p-8, 0x1p-16, 0x1p-32}) {
            const auto zeros = flush_samples(chain, 1.0, half_step);
            REQUIRE(zeros);
            const auto n = static_cast<std::size_t>(*zeros);
            INFO("chain " << number << ", half step " << half_step << ": " << n);
            REQUIRE(n + 1 < left.size());
            CHECK(left[n + 1] < static_cast<long double>(half_step));
            if (n > 0) CHECK(left[n] >= static_cast<long double>(half_step) * (1.0L - 4e-6L));
        }
    }
}

TEST_CASE("flush: the bound of the rest is one, after every piece", "[filters]") {
    const std::uint64_t seed = 5150;
    INFO("seed " << seed);
    Random random(seed);
    for (int number = 0; number < 200; ++number) {
        const FilterChain chain = random_chain(random);
        const auto left = tails(chain, 6000);
        ImpulseRun impulse(chain);
        CHECK(static_cast<long double>(impulse.rest()) >= left[0] * (1.0L - 1e-12L));
        for (std::size_t pieces = 1; pieces <= 3; ++pieces) {
            (void)impulse.next();
            const long double there = left[pieces * ImpulseRun::piece_samples];
            if (there < 1e-190L) continue;  // the filters drop states below 1e-200
            CHECK(static_cast<long double>(impulse.rest()) >= there * (1.0L - 1e-9L));
        }
    }
}

TEST_CASE("flush: long memories, sharp ones, and none within 2^24", "[filters]") {
    // r = exp(-1e-6): 1e6 ln(2^16 x 1e6) = 24.9e6 samples.
    const auto pole = [](double r, double gain) {
        return FilterChain{stage(BiquadCascade{{{gain, 0.0, 0.0, -r, 0.0}}})};
    };
    CHECK_FALSE(flush_samples(pole(1.0 - 1e-6, 1.0), 1.0, 0x1p-16));
    CHECK(flush_samples(pole(1.0 - 1e-6, 1e-6), 1.0, 0x1p-16));  // 1e6 ln(2^16) = 11.1e6
    CHECK_FALSE(flush_samples(pole(std::nextafter(1.0, 0.0), 1.0), 1.0, 0x1p-16));
    // Nothing to reach: a step or a scale that is none.
    CHECK_FALSE(flush_samples({}, 1.0, 0.0));
    CHECK_FALSE(flush_samples({}, 0.0, 0.0));
    // Sixty-four sharp sections: the bound overflows before it comes down.
    const BiquadCascade sharp{std::vector<BiquadSection>(64, cookbook(Shape::low_pass, 0.001, 0.7))};
    const auto zeros = flush_samples({stage(sharp)}, 1.0, 0x1p-16);
    REQUIRE(zeros);
    CHECK((*zeros > 10000 && *zeros < 100000));
}

TEST_CASE("l1 norm: a comb whose echoes are rarer than its time constants", "[filters]") {
    // 1 + 1e-3 + 1e-6 + ... = 1 / (1 - 1e-3); each echo 65536 samples after the one before.
    CHECK_THAT(l1_norm({stage(Comb{65536, 1.0, 0.0, -1e-3})}), Catch::WithinRel(1.0 / 0.999, 2e-12));
    CHECK_THAT(l1_norm({stage(Comb{7, 1.0, 0.0, 0.999})}), Catch::WithinRel(1000.0, 1e-11));
    CHECK(l1_norm({stage(Comb{5, 1.0, -1.0, 0.0})}) == 2.0);
}
