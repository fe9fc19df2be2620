#include "oracle/filters/rates.hpp"

#include <algorithm>
#include <complex>
#include <numbers>

#include "oracle/filters/cic.hpp"
#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

struct Named {
    const char* name;
    FilterChain chain;
};

std::vector<Named> rate_changers() {
    const BiquadCascade low{{cookbook(Shape::low_pass, 0.05, 0.7)}};
    return {
        {"cic decimator", {stage(CicDecimator{4, 25, 1, {}})}},
        {"cic decimator, delay 2, shift", {stage(CicDecimator{3, 8, 2, 12})}},
        {"cic interpolator", {stage(CicInterpolator{3, 8, 1, {}})}},
        {"cic interpolator, delay 2, shift", {stage(CicInterpolator{2, 300, 2, 10})}},
        {"fir decimator", {stage(FirDecimator{noise(64, 1), 4})}},
        {"fir decimator with fewer taps than its factor", {stage(FirDecimator{{1.0}, 7})}},
        {"fir decimator, long", {stage(FirDecimator{noise(2500, 2), 3})}},
        {"cic decimator that waits for the last", {stage(CicDecimator{3, 10, 2, {}, 9})}},
        {"fir decimator that returns with the second", {stage(FirDecimator{noise(64, 21), 4, 1})}},
        {"fir decimator, long, that waits for the last", {stage(FirDecimator{noise(2500, 22), 3, 2})}},
        {"fir interpolator", {stage(FirInterpolator{noise(40, 3), 5})}},
        {"up and down", {stage(FirInterpolator{noise(30, 4), 3}), stage(FirDecimator{noise(20, 5), 5})}},
        {"down and up", {stage(CicDecimator{2, 4, 1, {}}), stage(low), stage(CicInterpolator{2, 4, 1, {}})}},
        {"up and down, waiting", {stage(FirInterpolator{noise(30, 4), 3}), stage(FirDecimator{noise(20, 5), 5, 3})}},
        {"down, down and up, waiting",
         {stage(CicDecimator{2, 4, 1, {}, 3}), stage(FirDecimator{noise(20, 23), 3, 1}), stage(low),
          stage(CicInterpolator{2, 4, 1, {}})}},
        {"all the way",
         {stage(MovingAverage{3}), stage(CicDecimator{3, 16, 1, {}}), stage(Fir{noise(9, 6)}),
          stage(FirDecimator{noise(31, 7), 2}), stage(low), stage(FirInterpolator{noise(12, 8), 3}),
          stage(Comb{3, 1.0, 0.5, -0.5})}},
    };
}

std::vector<double> run_at_rate(const FilterChain& chain, std::span<const double> in) {
    const auto filter = make_filter(chain);
    std::vector<double> out(filter->outputs_for(in.size()));
    filter->process(in, out);
    return out;
}

std::vector<double> stuffed(std::span<const double> in, int factor) {
    std::vector<double> out(in.size() * static_cast<std::size_t>(factor), 0.0);
    for (std::size_t n = 0; n < in.size(); ++n) out[n * static_cast<std::size_t>(factor)] = in[n];
    return out;
}

std::vector<double> each(std::span<const double> in, int factor, int phase = 0) {
    std::vector<double> out;
    for (auto n = static_cast<std::size_t>(phase); n < in.size(); n += static_cast<std::size_t>(factor))
        out.push_back(in[n]);
    return out;
}

// Hogenauer's own structure, in words that wrap: integrators at the one rate, combs at the other.
std::vector<std::int64_t> integrators(std::vector<std::int64_t> x, int order) {
    for (int i = 0; i < order; ++i) {
        std::uint64_t sum = 0;
        for (auto& value : x) value = static_cast<std::int64_t>(sum += static_cast<std::uint64_t>(value));
    }
    return x;
}

std::vector<std::int64_t> combs(std::vector<std::int64_t> x, int order, int delay) {
    for (int i = 0; i < order; ++i) {
        for (std::size_t n = x.size(); n-- > 0;) {
            const std::uint64_t old = n >= static_cast<std::size_t>(delay)
                                          ? static_cast<std::uint64_t>(x[n - static_cast<std::size_t>(delay)])
                                          : 0;
            x[n] = static_cast<std::int64_t>(static_cast<std::uint64_t>(x[n]) - old);
        }
    }
    return x;
}

}  // namespace

TEST_CASE("rates: any split into blocks gives the same bits, and outputs_for says how many", "[filters]") {
    const auto in = noise(5003, 11);
    for (const auto& changer : rate_changers()) {
        const auto& name = changer.name;  // clang 14 captures no structured binding
        const auto& chain = changer.chain;
        const auto whole = run_at_rate(chain, in);
        CHECK(whole.size() == static_cast<std::size_t>(outputs_after(chain, 5003)));
        for (const Split split : every_split) {
            INFO(name << ", split " << static_cast<int>(split));
            const auto filter = make_filter(chain);
            std::vector<double> out;
            bool counts_agree = true;
            for_blocks(split, in.size(), [&](std::size_t first, std::size_t count) {
                const std::size_t before = out.size(), expected = filter->outputs_for(count);
                out.resize(before + expected);
                filter->process(std::span(in).subspan(first, count), std::span(out).subspan(before));
                counts_agree = counts_agree && out.size() == static_cast<std::size_t>(outputs_after(
                                                                 chain, static_cast<std::int64_t>(first + count)));
            });
            CHECK(counts_agree);
            CHECK(same_bits(out, whole));
        }
    }
}

TEST_CASE("rates: reset equals fresh, in the middle of a cycle too", "[filters]") {
    const auto before = noise(1777, 12), in = noise(3001, 13);
    for (const auto& changer : rate_changers()) {
        const auto& name = changer.name;  // clang 14 captures no structured binding
        const auto& chain = changer.chain;
        INFO(name);
        const auto filter = make_filter(chain);
        std::vector<double> out(filter->outputs_for(before.size()));
        filter->process(before, out);
        filter->reset();
        out.assign(filter->outputs_for(in.size()), 0.0);
        filter->process(in, out);
        CHECK(same_bits(out, run_at_rate(chain, in)));
    }
}

TEST_CASE("rates: a block writes its outputs and nothing behind them", "[filters]") {
    const auto in = noise(1000, 14);
    for (const auto& changer : rate_changers()) {
        const auto& name = changer.name;  // clang 14 captures no structured binding
        const auto& chain = changer.chain;
        INFO(name);
        const auto filter = make_filter(chain);
        const std::size_t count = filter->outputs_for(in.size());
        std::vector<double> out(count + 3, 77.0);
        filter->process(in, std::span(out).first(count));
        CHECK((out[count] == 77.0 && out[count + 1] == 77.0 && out[count + 2] == 77.0));
    }
}

TEST_CASE("fir decimator: output m is that of the FIR at input m R + phase, bit for bit", "[filters]") {
    const auto in = noise(4000, 15);
    for (const int factor : {2, 3, 7, 4096}) {
        for (const std::size_t taps : {1u, 5u, 64u, 700u}) {
            const auto list = noise(taps, 16);
            const auto full = run({stage(Fir{list})}, in);
            CHECK(same_bits(run_at_rate({stage(FirDecimator{list, factor})}, in), each(full, factor)));
            for (const int phase : {1, factor / 2, factor - 1}) {
                CHECK(
                    same_bits(run_at_rate({stage(FirDecimator{list, factor, phase})}, in), each(full, factor, phase)));
            }
        }
    }
}

TEST_CASE("fir interpolator: the FIR behind stuffed zeros", "[filters]") {
    const auto in = noise(700, 17);
    for (const int factor : {2, 3, 8}) {
        const auto taps = noise(static_cast<std::size_t>(24 * factor), 18);
        const auto expected = run({stage(Fir{taps})}, stuffed(in, factor));
        const auto out = run_at_rate({stage(FirInterpolator{taps, factor})}, in);
        REQUIRE(out.size() == expected.size());
        // The same products in the same order; the zeros between them add nothing.
        CHECK(same_bits(out, expected));
    }
}

TEST_CASE("cic decimator: the same as integrators and combs in words that wrap", "[filters]") {
    const std::uint64_t seed = 20261202;
    INFO("seed " << seed);
    Random random(seed);
    for (int trial = 0; trial < 60; ++trial) {
        const int order = static_cast<int>(random.whole(1, 8)), delay = static_cast<int>(random.whole(1, 2));
        // Codes of 16 bits times the gain stay below 2^53, where every sum is exact.
        const double most = std::pow(2.0, 37.0 / order) / delay;
        const int factor = static_cast<int>(random.whole(2, static_cast<std::int64_t>(std::min(most, 300.0))));
        std::vector<std::int64_t> codes(3000);
        for (auto& code : codes) code = trial % 3 == 0 ? -32768 : random.whole(-32768, 32767);
        const std::vector<double> in(codes.begin(), codes.end());

        auto kept = integrators(codes, order);
        const int phase = trial % 2 == 0 ? 0 : static_cast<int>(random.whole(1, factor - 1));
        std::vector<std::int64_t> low;
        for (auto n = static_cast<std::size_t>(phase); n < kept.size(); n += static_cast<std::size_t>(factor))
            low.push_back(kept[n]);
        const auto expected = combs(low, order, delay);
        const auto out = run_at_rate({stage(CicDecimator{order, factor, delay, 0, phase})}, in);
        INFO("order " << order << ", factor " << factor << ", delay " << delay << ", phase " << phase);
        REQUIRE(out.size() == expected.size());
        for (std::size_t m = 0; m < out.size(); ++m) {
            if (out[m] != static_cast<double>(expected[m])) FAIL("output " << m);
        }
    }
}

TEST_CASE("cic interpolator: the same as combs and integrators in words that wrap", "[filters]") {
    const std::uint64_t seed = 20261203;
    INFO("seed " << seed);
    Random random(seed);
    for (int trial = 0; trial < 60; ++trial) {
        const int order = static_cast<int>(random.whole(1, 8)), delay = static_cast<int>(random.whole(1, 2));
        const double most = std::pow(2.0, 37.0 / order) / delay;
        const int factor = static_cast<int>(random.whole(2, static_cast<std::int64_t>(std::min(most, 300.0))));
        std::vector<std::int64_t> codes(200);
        for (auto& code : codes) code = random.whole(-32768, 32767);
        const std::vector<double> in(codes.begin(), codes.end());

        const auto combed = combs(codes, order, delay);
        std::vector<std::int64_t> high(codes.size() * static_cast<std::size_t>(factor), 0);
        for (std::size_t n = 0; n < combed.size(); ++n) high[n * static_cast<std::size_t>(factor)] = combed[n];
        const auto expected = integrators(high, order);
        const auto out = run_at_rate({stage(CicInterpolator{order, factor, delay, 3})}, in);
        REQUIRE(out.size() == expected.size());
        for (std::size_t m = 0; m < out.size(); ++m) {
            if (out[m] != static_cast<double>(expected[m]) / 8.0) FAIL("output " << m << " of order " << order);
        }
    }
}

TEST_CASE("cic: without a shift the gain at zero frequency is 1, with one it is that of the paper", "[filters]") {
    const std::vector<double> ones(3000, 1.0);
    CHECK(run_at_rate({stage(CicDecimator{4, 25, 1, {}})}, ones).back() == 1.0);
    CHECK(run_at_rate({stage(CicDecimator{4, 25, 2, {}})}, ones).back() == 1.0);
    CHECK(run_at_rate({stage(CicInterpolator{3, 8, 2, {}})}, ones).back() == 1.0);
    // Hogenauer (1981): (R M)^N, here 25^4 = 390625 (cic-bit-growth, first row), and R^(N-1) M^N.
    CHECK(run_at_rate({stage(CicDecimator{4, 25, 1, 8})}, ones).back() == 390625.0 / 256.0);
    CHECK(run_at_rate({stage(CicInterpolator{3, 8, 2, 0})}, ones).back() == 8.0 * 8.0 * 8.0);
}

TEST_CASE("rates: ratios are in lowest terms, cycles say when the pattern repeats", "[filters]") {
    const auto down = [](int factor) { return stage(FirDecimator{{1.0}, factor}); };
    const auto up = [](int factor) {
        return stage(FirInterpolator{std::vector<double>(static_cast<std::size_t>(factor), 1.0), factor});
    };
    CHECK(rate_ratio(FilterChain{}) == RateRatio{1, 1});
    CHECK(rate_ratio(FilterChain{stage(MovingAverage{3})}) == RateRatio{1, 1});
    CHECK(rate_ratio(FilterChain{up(6), down(4)}) == RateRatio{3, 2});
    CHECK(rate_ratio(FilterChain{down(2), up(2)}) == RateRatio{1, 1});
    CHECK_FALSE(changes_rate({stage(MovingAverage{3})}));
    CHECK(changes_rate({down(2), up(2)}));
    CHECK(rate_cycle({}) == RateCycle{1, 1});
    CHECK(rate_cycle({down(2), up(2)}) == RateCycle{2, 2});
    CHECK(rate_cycle({up(2), down(2)}) == RateCycle{1, 1});
    CHECK(rate_cycle({up(6), down(4)}) == RateCycle{2, 3});
    CHECK(rate_cycle({down(6), up(4), down(3)}) == RateCycle{18, 4});
    CHECK(rate_ratio(FilterChain(32, up(4096))).up == 1 << 30);
    CHECK(output_rate_hz(down(8), 9600.0) == 1200.0);
    CHECK(output_rate_hz(up(3), 400.0) == 1200.0);
    CHECK(output_rate_hz(stage(MovingAverage{3}), 400.0) == 400.0);
    CHECK(outputs_after({down(4)}, 0) == 0);
    CHECK(outputs_after({down(4)}, 1) == 1);
    CHECK(outputs_after({down(4)}, 4) == 1);
    CHECK(outputs_after({down(4)}, 5) == 2);
    CHECK(outputs_after({up(3), down(2)}, 3) == 5);
    // With its last input a group is complete; with the second of four it is not, and the output is there.
    const FilterChain waits{stage(FirDecimator{{1.0}, 4, 3})}, second{stage(CicDecimator{1, 4, 1, {}, 1})};
    CHECK((outputs_after(waits, 3) == 0 && outputs_after(waits, 4) == 1 && outputs_after(waits, 7) == 1 &&
           outputs_after(waits, 8) == 2));
    CHECK((outputs_after(second, 1) == 0 && outputs_after(second, 2) == 1 && outputs_after(second, 5) == 1 &&
           outputs_after(second, 6) == 2));
    CHECK((rate_cycle(waits) == RateCycle{4, 1} && rate_ratio(waits) == RateRatio{1, 4}));
    CHECK((phase_samples_of(waits[0].design) == 3 && phase_samples_of(second[0].design) == 1));
    CHECK(phase_samples_of(up(3).design) == 0);
}

TEST_CASE("rates: a phase is a turn by its samples at the input's rate", "[filters]") {
    // Of a tap alone H is 1, so that what stays is e^(j 2 pi f phase): f = 1/16, phase 2 an eighth of a turn.
    const auto h = response_at({stage(FirDecimator{{1.0}, 4, 2})}, 1.0 / 16.0);
    CHECK(h.real() == Approx(std::sqrt(0.5)).epsilon(1e-15));
    CHECK(h.imag() == Approx(std::sqrt(0.5)).epsilon(1e-15));
    // Beyond half the output's rate the gain is what comes through at the alias; behind a decimator of 5 that is f =
    // 1/2.
    const auto twice = response_at({stage(FirDecimator{{1.0}, 5}), stage(FirDecimator{{1.0}, 2, 1})}, 0.1);
    CHECK(twice.real() == Approx(-1.0).epsilon(1e-15));
    CHECK(std::fabs(twice.imag()) < 1e-15);
    // A CIC that waits for the last input of its window is delayed by (R - 1) / 2 less its phase: ahead of its time.
    const FilterChain sum{stage(CicDecimator{1, 8, 1, {}, 7})};
    CHECK(std::arg(response_at(sum, 0.01)) == Approx(2.0 * std::numbers::pi * 0.01 * (7.0 - 3.5)).epsilon(1e-12));
}

TEST_CASE("rates: the response is what a tone of the base band meets", "[filters]") {
    // A complex tone as two runs; the output behind all transients over the tone at the output's times. Where images
    // fall on the tone it cannot be told apart, so only the phase-averaged coefficient is compared: the correlation
    // with the tone over whole cycles of image and tone.
    for (const auto& changer : rate_changers()) {
        const auto& name = changer.name;  // clang 14 captures no structured binding
        const auto& chain = changer.chain;
        const RateRatio ratio = rate_ratio(chain);
        const RateCycle cycle = rate_cycle(chain);
        const std::size_t periods = 1024;
        const std::size_t inputs = static_cast<std::size_t>(cycle.inputs) * periods;
        for (const int bin : {0, 1, 37, 150}) {
            const double f = static_cast<double>(bin) / static_cast<double>(inputs);
            std::vector<double> real(3 * inputs), imaginary(3 * inputs);
            for (std::size_t n = 0; n < real.size(); ++n) {
                const double turns = std::remainder(f * static_cast<double>(n % inputs), 1.0);
                real[n] = std::cos(2.0 * std::numbers::pi * turns);
                imaginary[n] = std::sin(2.0 * std::numbers::pi * turns);
            }
            const auto yr = run_at_rate(chain, real), yi = run_at_rate(chain, imaginary);
            const std::size_t outputs = static_cast<std::size_t>(cycle.outputs) * periods;
            std::complex<double> sum = 0.0;
            for (std::size_t m = yr.size() - outputs; m < yr.size(); ++m) {
                const double turns = std::remainder(
                    static_cast<double>(bin) * static_cast<double>(m % outputs) / static_cast<double>(outputs), 1.0);
                sum += std::complex(yr[m], yi[m]) * std::polar(1.0, -2.0 * std::numbers::pi * turns);
            }
            const auto measured = sum / static_cast<double>(outputs);
            INFO(name << ", bin " << bin << ", up " << ratio.up << ", down " << ratio.down);
            // Sums of some 10^5 terms of rounding 2^-53, and the transients of sections, gone after 2 x 10^4 samples.
            CHECK(std::abs(measured - response_at(chain, f)) < 1e-11 * (1.0 + l1_norm(chain)));
        }
    }
}

TEST_CASE("rates: the L1 norm is the largest output of any phase", "[filters]") {
    for (const auto& changer : rate_changers()) {
        const auto& name = changer.name;  // clang 14 captures no structured binding
        const auto& chain = changer.chain;
        INFO(name);
        const RateCycle cycle = rate_cycle(chain);
        // Weights of every input on the outputs of one cycle, from single unit samples, by the filter itself.
        const std::size_t length =
            3 * static_cast<std::size_t>(cycle.inputs) * (4000 / static_cast<std::size_t>(cycle.inputs) + 1);
        std::vector<double> sums(static_cast<std::size_t>(cycle.outputs), 0.0);
        for (std::int64_t input = 0; input < cycle.inputs; ++input) {
            std::vector<double> in(length, 0.0);
            in[static_cast<std::size_t>(input)] = 1.0;
            const auto out = run_at_rate(chain, in);
            for (std::size_t m = 0; m < out.size(); ++m) sums[m % sums.size()] += std::fabs(out[m]);
        }
        const double expected = *std::max_element(sums.begin(), sums.end());
        CHECK(l1_norm(chain) == Approx(expected).epsilon(1e-9));
        // No sign pattern of inputs does more.
        Random random(5);
        std::vector<double> signs(6000);
        for (double& x : signs) x = random.bits() % 2 == 0 ? 1.0 : -1.0;
        for (const double y : run_at_rate(chain, signs)) REQUIRE(std::fabs(y) <= expected * (1.0 + 1e-12));
    }
}

TEST_CASE("rates: responses that would take minutes are not run", "[filters]") {
    // 3105 responses behind a rise by 3812 are 1e11 samples: the L1 norm is the stages' product, 2 x 2 at most as the
    // last comb of each has delay 2, and how much to flush is not known.
    const CicInterpolator up{4, 3812, 2, std::nullopt};
    const CicDecimator down{2, 3105, 2, std::nullopt, 0};
    const FilterChain chain{FilterStage{up, std::nullopt}, FilterStage{down, std::nullopt}};
    CHECK(l1_norm(chain) ==
          Approx(l1_norm({FilterStage{up, std::nullopt}}) * l1_norm({FilterStage{down, std::nullopt}})));
    CHECK_FALSE(flush_samples(chain, 1.0, 0x1p-16));
    // Alone the most laborious stage is run.
    const FilterChain most{FilterStage{CicDecimator{1, 4096, 2, std::nullopt, 0}, std::nullopt}};
    CHECK(l1_norm(most) == Approx(1.0));
}

TEST_CASE("rates: after the flush nothing of the past is left, and it keeps the cycle", "[filters]") {
    const double half_step = 0x1p-16;
    for (const auto& changer : rate_changers()) {
        const auto& name = changer.name;  // clang 14 captures no structured binding
        const auto& chain = changer.chain;
        INFO(name);
        const auto zeros = flush_samples(chain, 1.0, half_step);
        REQUIRE(zeros);
        const std::int64_t cycle = rate_cycle(chain).inputs;
        CHECK(*zeros % cycle == 0);
        const auto left_after = [&](std::int64_t count) {
            double largest = 0.0;
            Random random(9);
            for (int trial = 0; trial < 4; ++trial) {
                std::vector<double> in(static_cast<std::size_t>(3000 / cycle * cycle));
                for (double& x : in) x = trial == 0 ? 1.0 : random.bits() % 2 == 0 ? 1.0 : -1.0;
                const std::size_t past = in.size() + static_cast<std::size_t>(count);
                in.resize(past + 1000, 0.0);
                const auto out = run_at_rate(chain, in);
                for (auto m = static_cast<std::size_t>(outputs_after(chain, static_cast<std::int64_t>(past)));
                     m < out.size(); ++m)
                    largest = std::max(largest, std::fabs(out[m]));
            }
            return largest;
        };
        CHECK(left_after(*zeros) < half_step);
        // Without feedback all goes at once: two cycles less are too few.
        if (largest_pole_radius(chain) == 0.0 && *zeros >= 2 * cycle)
            CHECK(left_after(*zeros - 2 * cycle) >= half_step);
    }
}

TEST_CASE("cic: growth is that of Hogenauer's registers", "[filters]") {
    // check-values 9.5, COMPUTED from B_max = ceil(N log2(R M) + B_in - 1): the growth of rows of cic-bit-growth.
    CHECK(growth_bits(CicDecimator{4, 25, 1, {}}) == 19);
    CHECK(growth_bits(CicDecimator{3, 8, 1, {}}) == 9);
    CHECK(growth_bits(CicDecimator{3, 32, 2, {}}) == 18);
    CHECK(growth_bits(CicDecimator{5, 128, 1, {}}) == 35);
    // Behind the last comb 2^N, behind the last integrator R^(N-1) M^N.
    CHECK(growth_bits(CicInterpolator{3, 8, 1, {}}) == 6);
    CHECK(growth_bits(CicInterpolator{1, 8, 1, {}}) == 1);
    CHECK(growth_bits(CicInterpolator{4, 25, 1, {}}) == 14);
}
