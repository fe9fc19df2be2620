#include "oracle/filters/recursion.hpp"

#include <algorithm>
#include <limits>

#include "oracle/filters/coefficients.hpp"
#include "oracle/filters/stability.hpp"
#include "tests/oracle/filters/make.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

using Numbers = std::vector<double>;

Numbers product(const Numbers& p, const Numbers& q) {
    Numbers result(p.size() + q.size() - 1, 0.0);
    for (std::size_t i = 0; i < p.size(); ++i)
        for (std::size_t j = 0; j < q.size(); ++j) result[i + j] += p[i] * q[j];
    return result;
}

/// (1 - 7/8 z^-1)^12: every coefficient has at most 44 bits, so the polynomial is what it says.
Numbers twelve_poles() {
    Numbers a{1.0};
    for (int i = 0; i < 12; ++i) a = product(a, {1.0, -0.875});
    return a;
}

/// Its impulse response, C(n + 11, 11) (7/8)^n, to some 60 bits.
std::vector<long double> response_of_twelve(std::size_t length) {
    std::vector<long double> h{1.0L};
    for (std::size_t n = 1; n < length; ++n)
        h.push_back(h.back() * (static_cast<long double>(n) + 11.0L) / static_cast<long double>(n) * 0.875L);
    return h;
}

// What a program in plain double precision returns.
Numbers plain(const Recursion& design, const Numbers& in) {
    Numbers out(in.size(), 0.0);
    for (std::size_t n = 0; n < in.size(); ++n) {
        double sum = 0.0;
        for (std::size_t k = 0; k < design.b.size() && k <= n; ++k) sum += design.b[k] * in[n - k];
        for (std::size_t k = 1; k < design.a.size() && k <= n; ++k) sum -= design.a[k] * out[n - k];
        out[n] = sum;
    }
    return out;
}

Numbers unit(std::size_t length) {
    Numbers in(length, 0.0);
    in[0] = 1.0;
    return in;
}

}  // namespace

TEST_CASE("recursion: twelve poles in one place come out to the last bit, where plain double loses eleven digits",
          "[filters]") {
    const Recursion design{{1.0}, twelve_poles()};
    const auto expected = response_of_twelve(400);
    RecursionFilter filter(design);
    const auto out = run(filter, unit(400)), rough = plain(design, unit(400));
    double worst = 0.0, worst_plain = 0.0, peak = 0.0;
    for (std::size_t n = 0; n < out.size(); ++n) {
        const auto h = static_cast<double>(expected[n]);
        peak = std::max(peak, h);
        // Half an ulp for the output, and the reference's own 400 x 2^-63.
        if (n < 200) worst = std::max(worst, std::fabs(out[n] - h) / h);
        worst_plain = std::max(worst_plain, std::fabs(rough[n] - h));
    }
    CHECK(worst <= 0x1p-52);
    CHECK(worst_plain > 1e-8 * peak);
    // The bounds hold for both, an input of 1 in all.
    CHECK(worst_plain <= recursion_loss(design));
    CHECK(carried_recursion_loss(design) < 1e-15 * l1_norm({stage(design)}));
}

TEST_CASE("recursion: the losses are bounds, by signs that do the most harm they find", "[filters]") {
    const std::uint64_t seed = 20261205;
    INFO("seed " << seed);
    Random random(seed);
    for (int trial = 0; trial < 40; ++trial) {
        Recursion design{{1.0}, {1.0}};
        for (std::int64_t pairs = random.whole(1, 5); pairs > 0; --pairs) {
            const double r = random.between(0.3, 0.97), w = random.between(0.05, 3.0);
            design.a = product(design.a, {1.0, -2.0 * r * std::cos(w), r * r});
            design.b = product(design.b, {random.ratio(), random.ratio(), random.ratio()});
        }
        if (!is_stable(design)) continue;
        Numbers in(3000);
        for (double& x : in) x = random.ratio() > 0.0 ? 1.0 : -1.0;
        RecursionFilter filter(design);
        const auto out = run(filter, in), rough = plain(design, in);
        double most = 0.0;
        for (std::size_t n = 0; n < in.size(); ++n) most = std::max(most, std::fabs(out[n] - rough[n]));
        CHECK(most <= recursion_loss(design) + carried_recursion_loss(design));
        CHECK(carried_recursion_loss(design) < recursion_loss(design));
    }
}

TEST_CASE("recursion: a product of sections runs as the sections do", "[filters]") {
    const BiquadSection s{0.5, -0.25, 0.125, -1.0, 0.5}, t{1.0, 0.5, 0.25, 0.75, 0.25};
    const Recursion design{product({s.b0, s.b1, s.b2}, {t.b0, t.b1, t.b2}),
                           product({1.0, s.a1, s.a2}, {1.0, t.a1, t.a2})};
    const auto in = noise(3000, 61);
    const auto out = run({stage(design)}, in), sections = run({stage(BiquadCascade{{s, t}})}, in);
    double largest = 0.0;
    for (std::size_t n = 0; n < in.size(); ++n) largest = std::max(largest, std::fabs(out[n] - sections[n]));
    // Poles up to radius 0.71: both sides stray by some 2^-53 a sample, a few of them in sum.
    CHECK(largest < 4e-15);
    for (const double f : {0.0, 0.013, 0.21, 0.38, 0.5}) {
        const auto difference = response_at({stage(design)}, f) - response_at({stage(BiquadCascade{{s, t}})}, f);
        CHECK(std::abs(difference) < 4e-15);
    }
    CHECK(l1_norm({stage(design)}) == Approx(l1_norm({stage(BiquadCascade{{s, t}})})).epsilon(1e-12));
    CHECK(flush_samples({stage(design)}, 1.0, 1e-6) == flush_samples({stage(BiquadCascade{{s, t}})}, 1.0, 1e-6));
}

TEST_CASE("recursion: without feedback it is an FIR, and order 0 is a gain", "[filters]") {
    const auto in = noise(500, 62), taps = noise(33, 63);
    const auto out = run({stage(Recursion{taps, {1.0}})}, in), fir = run({stage(Fir{taps})}, in);
    for (std::size_t n = 0; n < in.size(); ++n) REQUIRE(std::fabs(out[n] - fir[n]) < 33.0 * 34.0 * 0x1p-53);
    CHECK(flush_samples({stage(Recursion{taps, {1.0}})}, 1.0, 1e-9) == 32 - 1 + 1);
    CHECK(run({stage(Recursion{{0.5}, {1.0}})}, Numbers{3.0, -1.0}) == Numbers{1.5, -0.5});
    CHECK(pole_radius(Recursion{{1.0}, {1.0, 0.0, 0.0}}) == 0.0);
}

TEST_CASE("recursion: any split gives the same bits, reset equals fresh, and silence ends", "[filters]") {
    const FilterChain chain{stage(Recursion{noise(9, 64), twelve_poles()})};
    const auto in = noise(5003, 65);
    const auto whole = run(chain, in);
    const auto filter = make_filter(chain);
    for (const Split split : every_split) {
        filter->reset();
        std::vector<double> out(in);
        for_blocks(split, in.size(), [&](std::size_t first, std::size_t count) {
            const auto block = std::span(out).subspan(first, count);
            filter->process(block, block);
        });
        CHECK(same_bits(out, whole));
    }
    CHECK(run(*filter, Numbers(6000, 0.0)).back() == 0.0);
    Numbers broken(50, 0.0);
    broken[3] = std::numeric_limits<double>::quiet_NaN();
    CHECK(std::isnan(run(*filter, broken).back()));
    filter->reset();
    CHECK(same_bits(run(*filter, in), whole));
}

TEST_CASE("stability: a recursion of order two is decided like a section, to the last bit", "[filters]") {
    const std::uint64_t seed = 20261206;
    INFO("seed " << seed);
    Random random(seed);
    int stable = 0, unstable = 0;
    for (int trial = 0; trial < 3000; ++trial) {
        const double a2 = random.between(-1.0, 1.0);
        double a1 = (1.0 + a2) * (random.bits() % 2 == 0 ? 1.0 : -1.0);
        for (std::int64_t step = random.whole(-2, 2); step != 0; step += step > 0 ? -1 : 1)
            a1 = std::nextafter(a1, step > 0 ? 10.0 : -10.0);
        const BiquadSection section{1.0, 0.0, 0.0, a1, a2};
        const bool expected = is_stable(section);
        if (is_stable(Recursion{{1.0}, {1.0, a1, a2}}) != expected) FAIL("a1 " << a1 << ", a2 " << a2);
        ++(expected ? stable : unstable);
    }
    CHECK((stable > 500 && unstable > 500));
    CHECK_FALSE(is_stable(Recursion{{1.0}, {1.0, -1.0}}));
    CHECK(is_stable(Recursion{{1.0}, {1.0, -std::nextafter(1.0, 0.0)}}));
    CHECK_FALSE(is_stable(Recursion{{1.0}, {1.0, 0.0, 0.0, 0.0, -1.0}}));
    CHECK(is_stable(Recursion{{1.0}, {1.0, 0.0, 0.0, 0.0, -std::nextafter(1.0, 0.0)}}));
    CHECK_FALSE(is_stable(Recursion{{1.0}, {1.0, 0.0, std::numeric_limits<double>::infinity()}}));
}

TEST_CASE("stability: the pole radius of a product is the largest of its sections", "[filters]") {
    const std::uint64_t seed = 20261207;
    INFO("seed " << seed);
    Random random(seed);
    for (int trial = 0; trial < 60; ++trial) {
        Numbers a{1.0};
        double largest = 0.0;
        // Coefficients of 8 bits: the product of six sections is exact in 53.
        for (std::int64_t pairs = random.whole(1, 6); pairs > 0; --pairs) {
            const BiquadSection s{1.0, 0.0, 0.0, static_cast<double>(random.whole(-127, 127)) / 64.0,
                                  static_cast<double>(random.whole(-127, 127)) / 128.0};
            a = product(a, {1.0, s.a1, s.a2});
            largest = std::max(largest, pole_radius(s));
        }
        CHECK(is_stable(Recursion{{1.0}, a}) == (largest < 1.0));
        // Two pairs that lie close together leave half of the 104 bits.
        CHECK(pole_radius(Recursion{{1.0}, a}) == Approx(largest).epsilon(1e-9));
    }
    // Twelve in one place: an error of 2^-104 moves them by its twelfth root, 0.0025.
    CHECK(pole_radius(Recursion{{1.0}, twelve_poles()}) == Approx(0.875).epsilon(0.01));
    CHECK(largest_pole_radius({stage(Recursion{{1.0}, {1.0, -0.5}})}) == Approx(0.5).epsilon(1e-12));
    CHECK(pole_radius(Recursion{{1.0}, {1.0, -3.0, 2.0}}) == Approx(2.0).epsilon(1e-12));
}

TEST_CASE("catalogue: b and a of a recursion, whatever a[0] is", "[filters]") {
    const auto made = make("iir", {{"b", Numbers{2.0, 4.0}}, {"a", Numbers{4.0, -2.0, 1.0}}});
    REQUIRE(made);
    const auto& recursion = std::get<Recursion>(made->design);
    CHECK(recursion.b == Numbers{0.5, 1.0});
    CHECK(recursion.a == Numbers{1.0, -0.5, 0.25});
    CHECK(made->kind == "iir");
    CHECK(make("iir", {{"b", Numbers(33, 0.01)}, {"a", Numbers{1.0}}}));
    CHECK(refusal("iir", {{"b", Numbers(34, 0.01)}, {"a", Numbers{1.0}}}) ==
          "b: 34 coefficients\n  give 1 to 33 numbers, order 32 at most");
    CHECK(refusal("iir", {{"b", Numbers{1.0}}}) == "a: a is missing\n  give 1 to 33 numbers, order 32 at most");
    CHECK(refusal("iir", {{"b", Numbers{1.0}}, {"a", Numbers{0.0, 1.0}}}) ==
          "a: a[0] is 0, and everything is divided by it\n  begin with the coefficient of y[n], 1 in most tables");
    CHECK(refusal("iir", {{"b", Numbers{0.0, 0.0}}, {"a", Numbers{1.0, 0.5}}}) ==
          "b: the filter passes nothing: all of b is 0\n  at least one of b must differ from 0");
    CHECK(refusal("iir", {{"b", Numbers{1.0}}, {"a", Numbers{1e-12, 1e-13}}}) ==
          "b: 1e+12 is no coefficient, after division by a[0] = 1e-12\n  give numbers from -1e+09 to 1e+09");
    CHECK(refusal("iir", {{"b", Numbers{1.0}}, {"a", Numbers{1.0, 2e9}}}) ==
          "a: 2e+09 is no coefficient\n  give numbers from -1e+09 to 1e+09");
}

TEST_CASE("catalogue: an unstable recursion is refused with its pole radius, and the sign that would do", "[filters]") {
    const std::string where =
        "\n  poles must lie inside the unit circle, where y[n] = sum b[k] x[n-k] - sum a[k] y[n-k]";
    CHECK(refusal("iir", {{"b", Numbers{1.0}}, {"a", Numbers{1.0, -2.1, 1.1}}}) ==
          "a: the filter is unstable: a puts a pole at radius 1.1" + where);
    CHECK(refusal("iir", {{"b", Numbers{1.0}}, {"a", Numbers{1.0, 1.5, -0.7}}}) ==
          "a: the filter is unstable: a puts a pole at radius 1.87361025" + where +
              "; with the signs of all a behind a[0] turned round it is stable");
    CHECK(refusal("iir", {{"b", Numbers{1.0}}, {"a", Numbers{0.5, 0.5}}}) ==
          "a: the filter is unstable: a puts a pole at radius 1, after division by a[0] = 0.5" + where);
    CHECK(refusal("iir", {{"b", Numbers{1.0}}, {"a", Numbers{1.0, 0.999}}}) == "accepted");
    CHECK(refusal("iir", {{"b", Numbers{0.01, 0.02, 0.01}},
                          {"a", Numbers{1.0, -1.9, 0.998}},
                          {"coefficient_fraction_bits", whole(7)}}) ==
          "coefficient_fraction_bits: with 7 fraction bits the filter is unstable: a puts a pole at radius 1\n"
          "  store the coefficients with 8 fraction bits or more");
    const auto rounded = with_rounded_coefficients(
        *make("iir", {{"b", Numbers{0.3}}, {"a", Numbers{1.0, -0.7}}, {"coefficient_fraction_bits", whole(2)}}));
    CHECK(std::get<Recursion>(rounded.design).b == Numbers{0.25});
    CHECK(std::get<Recursion>(rounded.design).a == Numbers{1.0, -0.75});
}
