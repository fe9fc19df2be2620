// Twins of medians, and of recursions by b and a.
#include <algorithm>
#include <bit>
#include <limits>

#include "tests/oracle/arithmetic/twin_support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

Given word(const char* name, const char* value) { return {name, std::string(value)}; }
Given number(const char* name, int value) { return {name, whole(value)}; }

FilterStage median(int points, std::initializer_list<Given> promised) {
    return promised_stage("median", {number("points", points)}, promised);
}

template <class Value, class Middle>
Codes by_sorting(const std::vector<Value>& in, std::size_t points, Middle middle) {
    Codes out;
    for (std::size_t n = 0; n < in.size(); ++n) {
        std::vector<Value> window(points, Value{});
        for (std::size_t i = 0; i < points && i <= n; ++i) window[i] = in[n - i];
        std::sort(window.begin(), window.end());
        out.push_back(middle(window[(points - 1) / 2], window[points / 2]));
    }
    return out;
}

}  // namespace

TEST_CASE("median: the middle one, or the mean of two, rounded", "[twin]") {
    const Codes in = noise_codes(2000, 81, -40, 40);  // many are equal
    for (const std::size_t points : {1u, 2u, 5u, 8u}) {
        const int count = static_cast<int>(points);
        const Codes floor = by_sorting(in, points, [](Code a, Code b) { return (a + b) >> 1; });
        CHECK(run(*twin_of({median(count, {word("rounding", "floor")})}), in) == floor);
        const Codes toward_zero = by_sorting(in, points, [](Code a, Code b) { return (a + b) / 2; });
        CHECK(run(*twin_of({median(count, {word("rounding", "toward-zero")})}), in) == toward_zero);
    }
    // q15 in and q7 out: the shift by 8 and the mean are one rounding.
    const Codes wide = noise_codes(500, 82);
    const Codes shorter = by_sorting(wide, 4, [](Code a, Code b) { return (a + b + 256) >> 9; });
    const Codes held = run(*twin_of({median(4, {word("rounding", "half-up")})}, "q15", "q7"), wide);
    CHECK(held == shorter);
}

TEST_CASE("median: in float32 the mean is a sum and a half, and a NaN stays until it has left", "[twin][float32]") {
    Random random(83);
    std::vector<float> values(500);
    for (float& value : values) value = static_cast<float>(random.ratio());
    Codes in;
    for (const float value : values) in.push_back(std::bit_cast<Code>(value));
    const auto bits = [](float a, float b) { return std::bit_cast<Code>((a + b) / 2.0f); };
    CHECK(run(*twin_of({median(4, {})}, "f32", "f32"), in) == by_sorting(values, 4, bits));
    CHECK(run(*twin_of({median(5, {})}, "f32", "f32"), in) ==
          by_sorting(values, 5, [](float a, float) { return std::bit_cast<Code>(a); }));
    in[100] = std::bit_cast<Code>(std::numeric_limits<float>::quiet_NaN());
    const Codes out = run(*twin_of({median(3, {})}, "f32", "f32"), in);
    for (std::size_t n = 95; n < 110; ++n) CHECK(std::isnan(std::bit_cast<float>(out[n])) == (n >= 100 && n < 103));
}

TEST_CASE("median: any split, and its state carries on", "[twin]") {
    const Codes in = noise_codes(1000, 84);
    for (const bool is_float : {false, true}) {
        const auto stage = is_float ? median(6, {word("number", "float32")}) : median(6, {word("rounding", "floor")});
        const auto twin = twin_of({stage}), other = twin_of({stage});
        const Codes expected = run(*twin, in);
        twin->reset();
        Codes out(in.size());
        for_blocks(Split::random, in.size(), [&](std::size_t first, std::size_t count) {
            twin->process(std::span(in).subspan(first, count), std::span(out).subspan(first, count));
        });
        CHECK(out == expected);
        REQUIRE(other->set_state(twin->state()));
        CHECK(run(*twin, in) == run(*other, in));
        CHECK_FALSE(other->set_state(std::vector<std::int64_t>{1, 2, 3, 4}));
    }
}

TEST_CASE("iir: a recursion of the third order in each structure", "[twin]") {
    const Codes in = telling_codes();
    // b and a in 2^-13, poles within the circle.
    constexpr std::int64_t b[] = {400, 1200, 1200, 400}, c[] = {14000, -9000, 2000};
    std::vector<double> design_b, design_a{1.0};
    for (const auto each : b) design_b.push_back(static_cast<double>(each) / 8192.0);
    for (const auto each : c) design_a.push_back(static_cast<double>(-each) / 8192.0);
    const auto twin = [&](const char* structure) {
        const auto stage =
            promised_stage("iir", {{"b", design_b}, {"a", design_a}},
                           {number("coefficient_fraction_bits", 13), word("rounding", "half-up"),
                            word("structure", structure), number("state_bits", 32), word("state_overflow", "wrap")});
        return run(*twin_of({stage}), in);
    };
    const auto sat16 = [](std::int64_t v) { return std::clamp<std::int64_t>(v, -32768, 32767); };
    std::int64_t x[4] = {}, y[3] = {}, w[4] = {}, s[4] = {};
    Codes direct, canonic, transposed;
    for (const Code code : in) {
        std::copy_backward(x, x + 3, x + 4);
        x[0] = code;
        std::int64_t acc = 4096;
        for (int k = 0; k < 4; ++k) acc += b[k] * x[k];
        for (int k = 0; k < 3; ++k) acc += c[k] * y[k];
        std::copy_backward(y, y + 2, y + 3);
        y[0] = static_cast<std::int32_t>(acc >> 13);
        direct.push_back(static_cast<Code>(sat16(y[0])));

        acc = (std::int64_t{code} << 13) + 4096;
        for (int k = 0; k < 3; ++k) acc += c[k] * w[k];
        std::copy_backward(w, w + 3, w + 4);
        w[0] = static_cast<std::int32_t>(acc >> 13);
        acc = 4096;
        for (int k = 0; k < 4; ++k) acc += b[k] * w[k];
        canonic.push_back(static_cast<Code>(sat16(acc >> 13)));

        const std::int64_t out = sat16((s[0] + b[0] * code + 4096) >> 13);
        for (int k = 0; k < 3; ++k) s[k] = static_cast<std::int32_t>(s[k + 1] + b[k + 1] * code + c[k] * out);
        transposed.push_back(static_cast<Code>(out));
    }
    CHECK(twin("direct-1") == direct);
    CHECK(twin("direct-2") == canonic);
    CHECK(twin("transposed-2") == transposed);
    CHECK(direct != transposed);
}

TEST_CASE("twin: there is none of a comb that starts other than from zeros, nor of a cic in float32", "[twin]") {
    auto comb = promised_stage("comb", {number("delay_samples", 2), {"forward", 0.5}},
                               {word("rounding", "floor"), number("coefficient_fraction_bits", 8)});
    CHECK(make_twin(described_chain({comb})) != nullptr);
    comb.initial = Initial::first_sample;
    const auto started = describe({comb}, *sample_format("q15"), *sample_format("q15"), 1.0);
    CHECK(started.described->missing->error.problem == "a start other than zeros has no twin");
    CHECK(make_twin(*started.described) == nullptr);
    const auto cic =
        promised_stage("cic-decimator", {number("order", 2), number("factor", 4)}, {word("number", "float32")});
    const auto result = describe({cic}, *sample_format("f32"), *sample_format("f32"), 1.0);
    if (result.described) CHECK(make_twin(*result.described) == nullptr);
}
