#include "oracle/filters/node_path.hpp"

#include <array>

#include "tests/oracle/support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

const std::vector<BiquadSection> three_sections{
    {0.5, -0.2, 0.1, -1.2, 0.72}, {1.0, 0.4, -0.3, 0.6, 0.5}, {0.25, 0.5, 0.25, -0.9, 0.2}};
constexpr std::size_t length = 200, moment = 7;

FilterChain example_chain() {
    return {stage(MovingAverage{4}), stage(BiquadCascade{three_sections}), stage(Comb{3, 0.5, 0.25, -0.4}),
            stage(Fir{{0.3, 0.7, -0.2}})};
}

struct Slip {
    std::size_t section;
    enum Where { in_loop, behind, before, in_state } where;
};

// The three sections as their equations say, with an error of 1 made once at `moment`.
std::vector<double> sections_with(const Slip& slip, std::vector<double> x, bool direct_form_2) {
    for (std::size_t k = 0; k < three_sections.size(); ++k) {
        const BiquadSection& s = three_sections[k];
        double x1 = 0, x2 = 0, y1 = 0, y2 = 0, w1 = 0, w2 = 0;
        for (std::size_t n = 0; n < x.size(); ++n) {
            const auto error = [&](Slip::Where where) {
                return slip.section == k && slip.where == where && n == moment ? 1.0 : 0.0;
            };
            const double in = x[n] + error(Slip::before);
            double y = 0.0;
            if (direct_form_2) {
                const double w = in - s.a1 * w1 - s.a2 * w2 + error(Slip::in_state);
                y = s.b0 * w + s.b1 * w1 + s.b2 * w2;
                w2 = w1;
                w1 = w;
            } else {
                y = s.b0 * in + s.b1 * x1 + s.b2 * x2 - s.a1 * y1 - s.a2 * y2 + error(Slip::in_loop);
                x2 = x1;
                x1 = in;
                y2 = y1;
                y1 = y;
            }
            x[n] = y + error(Slip::behind);
        }
    }
    return x;
}

std::vector<double> after_sections(const Slip& slip, bool direct_form_2) {
    const FilterChain behind{stage(Comb{3, 0.5, 0.25, -0.4}), stage(Fir{{0.3, 0.7, -0.2}})};
    return run(behind, sections_with(slip, std::vector<double>(length, 0.0), direct_form_2));
}

void check_same(const std::vector<double>& seen, const FilterChain& path) {
    auto expected = impulse_response(path, length - moment);
    expected.insert(expected.begin(), moment, 0.0);
    REQUIRE(seen.size() == expected.size());
    for (std::size_t n = 0; n < seen.size(); ++n) CHECK_THAT(seen[n], Catch::WithinAbs(expected[n], 1e-13));
}

double squares_of(const FilterChain& chain, std::size_t samples) {
    double sum = 0.0;
    for (const double h : impulse_response(chain, samples)) sum += h * h;
    return sum;
}

}  // namespace

TEST_CASE("node path: an error of 1 in a section's sum, behind it or before it is the impulse response of its path",
          "[filters][node-path]") {
    const FilterChain chain = example_chain();
    for (std::size_t section = 0; section < 3; ++section) {
        INFO("section " << section);
        check_same(after_sections({section, Slip::in_loop}, false), path_to_output(chain, {1, section, true}));
        check_same(after_sections({section, Slip::behind}, false), path_to_output(chain, {1, section, false}));
        check_same(after_sections({section, Slip::before}, false), path_from_section(chain, {1, section, false}));
        check_same(after_sections({section, Slip::in_state}, true), path_from_section(chain, {1, section, true}));
    }
}

TEST_CASE("node path: stages that are no cascades have one node, and a comb has a loop", "[filters][node-path]") {
    const FilterChain chain = example_chain();
    const auto h = [](const FilterChain& path) { return impulse_response(path, 40); };
    CHECK(h(path_to_output(chain, {0})) == h({chain[1], chain[2], chain[3]}));
    CHECK(h(path_to_output(chain, {0, 0, true})) == h(path_to_output(chain, {0})));
    CHECK(h(path_to_output(chain, {2})) == h({chain[3]}));
    CHECK(h(path_to_output(chain, {2, 0, true})) == h({stage(Comb{3, 1.0, 0.0, -0.4}), chain[3]}));
    const FilterChain recursion{stage(Recursion{{0.5, 0.1}, {1.0, -0.6, 0.2, 0.1}}), chain[3]};
    CHECK(h(path_to_output(recursion, {0, 0, true})) == h({stage(Recursion{{1.0}, {1.0, -0.6, 0.2, 0.1}}), chain[3]}));
    CHECK(h(path_to_output(recursion, {0})) == h({chain[3]}));
    CHECK(h(path_from_section(chain, {2})) == h({chain[2], chain[3]}));
    CHECK(h(path_from_section(chain, {0})) == h(chain));
    CHECK(path_to_output(chain, {3}).empty());  // the output itself
    CHECK(path_to_output(chain, {4}).empty());
    CHECK(path_to_output(chain, {1, 3}).empty());
    CHECK(path_to_output(chain, {0, 1}).empty());
}

TEST_CASE("node path: the level at a node is that of the chain up to it", "[filters][node-path]") {
    const FilterChain chain = example_chain();
    const auto h = [](const FilterChain& path) { return impulse_response(path, 40); };
    const auto sections = [](std::size_t count) {
        return stage(
            BiquadCascade{{three_sections.begin(), three_sections.begin() + static_cast<std::ptrdiff_t>(count)}});
    };
    CHECK(h(path_from_input(chain, {0})) == h({chain[0]}));
    CHECK(h(path_from_input(chain, {1, 0})) == h({chain[0], sections(1)}));
    CHECK(h(path_from_input(chain, {1, 1, true})) == h({chain[0], sections(2)}));
    CHECK(h(path_from_input(chain, {3})) == h(chain));
    const BiquadSection& second = three_sections[1];
    CHECK(h(path_to_state(chain, {1, 1})) ==
          h({chain[0], sections(1), stage(BiquadCascade{{{1.0, 0.0, 0.0, second.a1, second.a2}}})}));
    CHECK(path_from_input(chain, {4}).empty());
}

TEST_CASE("node path: the words of the firmware do not go with a path", "[filters][node-path]") {
    FilterChain chain = example_chain();
    for (FilterStage& each : chain) {
        each.coefficient_fraction_bits = 4;
        each.channels = {2};
    }
    for (const FilterStage& each : path_to_output(chain, {1, 1, true})) {
        CHECK(!each.coefficient_fraction_bits);
        CHECK(each.channels.empty());
    }
}

TEST_CASE("noise gain: the closed form of a section is its sum of squares", "[filters][node-path]") {
    // An identity behind it makes the chain one that has no closed form.
    const auto run_of = [](const BiquadSection& s) {
        return noise_power_gain({stage(BiquadCascade{{s, {1.0, 0.0, 0.0, 0.0, 0.0}}})});
    };
    const auto closed_of = [](const BiquadSection& s) { return noise_power_gain({stage(BiquadCascade{{s}})}); };
    for (const double radius : {0.0, 0.3, 0.9, 0.999}) {
        for (const double turns : {0.0, 0.001, 0.1, 0.25, 0.4, 0.5}) {
            const double a1 = -2.0 * radius * std::cos(6.283185307179586 * turns), a2 = radius * radius;
            for (const BiquadSection& b : {BiquadSection{1, 0, 0}, BiquadSection{0.3, -0.6, 0.3},
                                           BiquadSection{0.2, 0.5, -0.7}, BiquadSection{0.0, 0.0, 2.0}}) {
                const BiquadSection s{b.b0, b.b1, b.b2, a1, a2};
                INFO("radius " << radius << ", turns " << turns << ", b " << b.b0 << ' ' << b.b1 << ' ' << b.b2);
                // The run strays by 2^-53 times the gain of 1/A, 1e6 at most, of a sum that is 1e-3 of it or more.
                CHECK_THAT(run_of(s), Catch::WithinRel(closed_of(s), 1e-9));
                if (radius < 0.95) CHECK_THAT(run_of(s), Catch::WithinRel(closed_of(s), 1e-12));
            }
        }
    }
}

TEST_CASE("noise gain: a one-pole has k / (2 - k), to the last digits also where k is small", "[filters][node-path]") {
    for (const double k : {0.5, 0x1p-10, 0x1p-29}) {
        const FilterChain chain{stage(BiquadCascade{{{k, 0.0, 0.0, k - 1.0, 0.0}}})};
        CHECK_THAT(noise_power_gain(chain), Catch::WithinRel(k / (2.0 - k), 4e-16));
        CHECK_THAT(l2_norm(chain), Catch::WithinRel(std::sqrt(k / (2.0 - k)), 4e-16));
    }
}

TEST_CASE("noise gain: FIR, moving average, comb and chains", "[filters][node-path]") {
    CHECK(noise_power_gain({}) == 1.0);
    CHECK(noise_power_gain({stage(Fir{{1.0, -2.0, 3.0}})}) == 14.0);
    CHECK(noise_power_gain({stage(MovingAverage{16})}) == 1.0 / 16.0);
    const FilterChain comb{stage(Comb{5, 0.5, 0.25, -0.9})};
    CHECK_THAT(noise_power_gain(comb), Catch::WithinRel(squares_of(comb, 4000), 1e-13));
    const FilterChain both{stage(MovingAverage{3}), stage(BiquadCascade{three_sections})};
    CHECK_THAT(noise_power_gain(both), Catch::WithinRel(squares_of(both, 4000), 1e-13));
}

TEST_CASE("noise gain: two poles nearer to the circle than 2^24 samples can follow", "[filters][node-path]") {
    // h[n] = k r^n with k = 2^-29 through an average of two: sum h^2 = k^2 (1/4 + ((1 + r) / 2)^2 / (1 - r^2)).
    const double k = 0x1p-29, r = 1.0 - k;
    const FilterChain chain{stage(BiquadCascade{{{k, 0.0, 0.0, -r, 0.0}}}), stage(MovingAverage{2})};
    const double exact = k * k * (0.25 + 0.25 * (1.0 + r) / k);
    // The rest of the series takes 1 - decay, 0.0156, and the recursion keeps 2^-53 / k of its value: 6e-8.
    CHECK_THAT(noise_power_gain(chain), Catch::WithinRel(exact, 1e-6));
}

TEST_CASE("signed sums: positive and negative parts make the DC gain and the L1 norm", "[filters][node-path]") {
    const SignedSums fir = signed_sums({stage(Fir{{1.0, -2.0, 3.0}})});
    CHECK(fir.positive == 4.0);
    CHECK(fir.negative == -2.0);
    const FilterChain chain = example_chain();
    const SignedSums sums = signed_sums(chain);
    CHECK_THAT(sums.positive + sums.negative, Catch::WithinAbs(dc_gain(chain), 1e-11));
    CHECK_THAT(sums.positive - sums.negative, Catch::WithinRel(l1_norm(chain), 1e-11));
    CHECK(sums.negative < -0.001);
    const SignedSums alternating = signed_sums({stage(BiquadCascade{{{1.0, 0.0, 0.0, 0.5, 0.0}}})});
    CHECK_THAT(alternating.positive, Catch::WithinRel(4.0 / 3.0, 1e-12));
    CHECK_THAT(alternating.negative, Catch::WithinRel(-2.0 / 3.0, 1e-12));
}

TEST_CASE("signed sums: a bounded error reaches what they say, and not more", "[filters][node-path]") {
    const FilterChain chain = example_chain();
    const double low = -0.25, high = 0.75;
    const SignedSums sums = signed_sums(chain);
    auto h = impulse_response(chain, length);
    std::vector<double> worst(length);
    for (std::size_t n = 0; n < length; ++n) worst[length - 1 - n] = h[n] > 0.0 ? high : low;
    CHECK_THAT(run(chain, worst).back(), Catch::WithinAbs(high * sums.positive + low * sums.negative, 1e-10));
}
