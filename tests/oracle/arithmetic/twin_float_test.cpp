// Float32 twins against the same filters written out with plain floats. Contraction is off in the whole tree.
#include <array>
#include <bit>
#include <cmath>
#include <limits>

#include "tests/oracle/arithmetic/twin_support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

Given word(const char* name, const char* value) { return {name, std::string(value)}; }

/// a b + c rounded once: the product of two floats is exact in double, the sum is rounded there to odd, which leaves
/// the second rounding right (S. Boldo and G. Melquiond, "Emulation of FMA and correctly rounded sums", 2008).
float once_rounded(float a, float b, float c) {
    const double product = static_cast<double>(a) * b, addend = c;
    const double sum = product + addend;
    const double part = sum - product;
    const double error = (product - (sum - part)) + (addend - part);
    if (error == 0.0 || !std::isfinite(sum)) return static_cast<float>(sum);
    auto bits = std::bit_cast<std::uint64_t>(sum);
    if ((bits & 1) == 0) bits = (sum > 0.0) == (error > 0.0) ? bits + 1 : bits - 1;
    return static_cast<float>(std::bit_cast<double>(bits));
}

float plus_product(float sum, float a, float b, bool fused) { return fused ? once_rounded(a, b, sum) : sum + a * b; }

Codes float_noise(std::size_t length, std::uint64_t seed) {
    Random random(seed);
    Codes codes(length);
    for (Code& code : codes) code = std::bit_cast<Code>(static_cast<float>(random.ratio()));
    return codes;
}

template <class Step>
Codes in_floats(const Codes& in, Step step) {
    Codes out;
    for (const Code code : in) out.push_back(std::bit_cast<Code>(static_cast<float>(step(std::bit_cast<float>(code)))));
    return out;
}

const FiveNumbers sharp{0.0036, 0.0072, 0.0036, -1.823, 0.8374};
constexpr float b0 = 0.0036f, b1 = 0.0072f, b2 = 0.0036f, c1 = 1.823f, c2 = -0.8374f;

}  // namespace

TEST_CASE("float32: a product and a sum are rounded once where they are fused, with and without the instruction",
          "[float32]") {
    // A tie that the product's own rounding would make: (1 + 2^-12)^2 = 1 + 2^-11 + 2^-24.
    const float edge = 1.0f + 0x1p-12f;
    CHECK(std::fmaf(edge, edge, 0x1p-60f) == 1.0f + 0x1p-11f + 0x1p-23f);
    CHECK(std::fmaf(edge, edge, -0x1p-60f) == 1.0f + 0x1p-11f);
    CHECK(std::fmaf(edge, edge, 0.0f) == 1.0f + 0x1p-11f);  // the tie itself, to even
    CHECK(std::fmaf(0x1p-75f, 0x1p-75f, 0x1p-149f) == 0x1p-148f);  // one and a half of the least float
    CHECK(std::fmaf(0x1.fffffep127f, 2.0f, -0x1.fffffep127f) == 0x1.fffffep127f);
    Random random(41);
    int unlike = 0;
    for (int i = 0; i < 200000; ++i) {
        const auto any = [&] {
            return static_cast<float>(std::ldexp(random.ratio(), static_cast<int>(random.whole(-30, 30))));
        };
        const float a = any(), b = any();
        const float c = i % 2 == 0 ? any() : static_cast<float>(-static_cast<double>(a) * b);  // cancels
        if (std::fmaf(a, b, c) != once_rounded(a, b, c)) FAIL("a = " << a << ", b = " << b << ", c = " << c);
        unlike += std::fmaf(a, b, c) != a * b + c ? 1 : 0;
    }
    CHECK(unlike > 50000);
}

TEST_CASE("float32: sections in each structure, each product rounded or fused", "[float32]") {
    const Codes in = float_noise(5000, 31);
    for (const bool fused : {false, true}) {
        const Given how = word("multiply_add", fused ? "fused" : "separate");
        float x1 = 0, x2 = 0, y1 = 0, y2 = 0, w1 = 0, w2 = 0, s1 = 0, s2 = 0;
        const Codes direct = in_floats(in, [&](float x) {
            float y = b0 * x;
            y = plus_product(y, b1, x1, fused);
            y = plus_product(y, b2, x2, fused);
            y = plus_product(y, c1, y1, fused);
            y = plus_product(y, c2, y2, fused);
            x2 = x1, x1 = x, y2 = y1, y1 = y;
            return y;
        });
        const Codes canonic = in_floats(in, [&](float x) {
            const float w = plus_product(plus_product(x, c1, w1, fused), c2, w2, fused);
            const float y = plus_product(plus_product(b0 * w, b1, w1, fused), b2, w2, fused);
            w2 = w1, w1 = w;
            return y;
        });
        const Codes transposed = in_floats(in, [&](float x) {
            const float y = plus_product(s1, b0, x, fused);
            s1 = plus_product(plus_product(s2, b1, x, fused), c1, y, fused);
            s2 = plus_product(b2 * x, c2, y, fused);
            return y;
        });
        CHECK(run(*twin_of({biquads({sharp}, {how})}, "f32", "f32"), in) == direct);
        CHECK(run(*twin_of({biquads({sharp}, {how, word("structure", "direct-2")})}, "f32", "f32"), in) == canonic);
        CHECK(run(*twin_of({biquads({sharp}, {how, word("structure", "transposed-2")})}, "f32", "f32"), in) ==
              transposed);
        CHECK(direct != transposed);
        CHECK(direct != canonic);
    }
}

TEST_CASE("float32: a cascade passes floats on, whatever its words at the ends", "[float32]") {
    const Codes in = noise_codes(3000, 7);
    const auto once = biquads({sharp}, {word("number", "float32"), word("stage_format", "f32")});
    const auto last = biquads({sharp}, {word("number", "float32"), word("rounding", "half-even")});
    const auto both = biquads({sharp, sharp}, {word("number", "float32"), word("rounding", "half-even")});
    const Codes in_stages = run(*twin_of({once, last}), in);
    CHECK(run(*twin_of({both}), in) == in_stages);
    CHECK(in_stages != Codes(in.size(), 0));
}

TEST_CASE("float32: firs in both orders, and combs", "[float32]") {
    const Codes in = float_noise(3000, 33);
    const std::vector<double> taps{0.11, -0.23, 0.37, 0.41, -0.07};
    for (const bool fused : {false, true}) {
        const Given how = word("multiply_add", fused ? "fused" : "separate");
        for (const bool oldest_first : {false, true}) {
            std::array<float, 5> past{};
            const Codes board = in_floats(in, [&](float x) {
                std::copy_backward(past.begin(), past.end() - 1, past.end());
                past[0] = x;
                const auto tap = [&](std::size_t i) { return oldest_first ? 4 - i : i; };
                float sum = static_cast<float>(taps[tap(0)]) * past[tap(0)];
                for (std::size_t i = 1; i < 5; ++i) {
                    sum = plus_product(sum, static_cast<float>(taps[tap(i)]), past[tap(i)], fused);
                }
                return sum;
            });
            const auto stage = promised_stage("fir", {{"taps", taps}},
                                              {how, word("summation", oldest_first ? "oldest-first" : "newest-first")});
            CHECK(run(*twin_of({stage}, "f32", "f32"), in) == board);
        }
        std::array<float, 3> past_in{}, past_out{};
        std::size_t at = 0;
        const Codes board = in_floats(in, [&](float x) {
            const float y = plus_product(plus_product(0.9f * x, 0.3f, past_in[at], fused), -0.7f, past_out[at], fused);
            past_in[at] = x;
            past_out[at] = y;
            at = (at + 1) % 3;
            return y;
        });
        const auto comb = promised_stage(
            "comb", {{"delay_samples", whole(3)}, {"direct", 0.9}, {"forward", 0.3}, {"feedback", 0.7}}, {how});
        CHECK(run(*twin_of({comb}, "f32", "f32"), in) == board);
    }
}

TEST_CASE("float32: one-poles by difference, with a leak and as a section", "[float32]") {
    const Codes in = float_noise(3000, 34);
    for (const bool fused : {false, true}) {
        const Given how = word("multiply_add", fused ? "fused" : "separate");
        float s = 0, t = 0, y = 0;
        const Codes difference = in_floats(in, [&](float x) { return s = plus_product(s, 0.03f, x - s, fused); });
        const Codes leak = in_floats(
            in, [&](float x) { return t = plus_product(plus_product(t, 0.03f, x, fused), -0.03f, t, fused); });
        const Codes section = in_floats(in, [&](float x) { return y = plus_product(0.03f * x, 0.97f, y, fused); });
        const auto twin = [&](const char* structure) {
            const auto stage = promised_stage("one-pole", {{"coefficient", 0.03}}, {how, word("structure", structure)});
            return run(*twin_of({stage}, "f32", "f32"), in);
        };
        CHECK(twin("difference") == difference);
        CHECK(twin("leak") == leak);
        CHECK(twin("direct-1") == section);
    }
}

TEST_CASE("float32: running and fresh sums, divided or multiplied", "[float32]") {
    const Codes in = float_noise(3000, 35);
    std::array<float, 7> past{};
    const auto shift_in = [&](float x) {
        const float oldest = past[6];
        std::copy_backward(past.begin(), past.end() - 1, past.end());
        past[0] = x;
        return oldest;
    };
    float sum = 0;
    const Codes running = in_floats(in, [&](float x) { return (sum = (sum - shift_in(x)) + x) / 7.0f; });
    past = {};
    const Codes newest_first = in_floats(in, [&](float x) {
        shift_in(x);
        float total = past[0];
        for (std::size_t i = 1; i < 7; ++i) total += past[i];
        return total / 7.0f;
    });
    past = {};
    const Codes oldest_first = in_floats(in, [&](float x) {
        shift_in(x);
        float total = past[6];
        for (std::size_t i = 6; i-- > 0;) total += past[i];
        return total * (1.0f / 7.0f);
    });
    const Given points{"points", whole(7)};
    CHECK(run(*twin_of({promised_stage("moving-average", {points}, {})}, "f32", "f32"), in) == running);
    CHECK(run(*twin_of({promised_stage("moving-average", {points}, {word("structure", "fresh-sum")})}, "f32", "f32"),
              in) == newest_first);
    CHECK(run(*twin_of({promised_stage("moving-average", {points},
                                       {word("structure", "fresh-sum"), word("summation", "oldest-first"),
                                        word("division", "reciprocal")})},
                       "f32", "f32"),
              in) == oldest_first);
}

TEST_CASE("float32: whole words are cast, or rounded, with both overflows", "[float32]") {
    const auto through = [](std::string_view in, std::string_view out, double gain, const Codes& codes,
                            std::initializer_list<Given> promised) {
        const auto pass = promised_stage("fir", {{"taps", std::vector<double>{1.0}}}, promised);
        return run(*twin_of({pass}, in, out, gain), codes);
    };
    const auto codes_of = [](std::vector<float> values) {
        Codes codes;
        for (const float value : values) codes.push_back(std::bit_cast<Code>(value));
        return codes;
    };
    const Codes halves = codes_of({2.5f, -2.5f, 0.75f, -0.75f, 1.5f});
    CHECK(through("f32", "i16", 1.0, halves, {}) == Codes{2, -2, 0, 0, 1});
    CHECK(through("f32", "i16", 1.0, halves, {word("rounding", "half-even")}) == Codes{2, -2, 1, -1, 2});
    CHECK(through("f32", "i16", 1.0, halves, {word("rounding", "half-away")}) == Codes{3, -3, 1, -1, 2});
    CHECK(through("f32", "i16", 1.0, halves, {word("rounding", "half-up")}) == Codes{3, -2, 1, -1, 2});
    CHECK(through("f32", "i16", 1.0, halves, {word("rounding", "floor")}) == Codes{2, -3, 0, -1, 1});
    CHECK(through("f32", "q15", 1.0, codes_of({0.5f, 1.0f, -1.0f, 0.99999f}), {}) ==
          Codes{16384, 32767, -32768, 32767});

    const float infinity = std::numeric_limits<float>::infinity(), nan = std::numeric_limits<float>::quiet_NaN();
    const Codes beyond =
        codes_of({32767.9f, 32768.0f, -32768.9f, -32769.0f, 98304.5f, 1e30f, infinity, -infinity, nan});
    CHECK(through("f32", "i16", 1.0, beyond, {}) ==
          Codes{32767, 32767, -32768, -32768, 32767, 32767, 32767, -32768, 0});
    // 1e30 is a multiple of 2^16: it has 24 bits, the lowest of which is 2^76.
    CHECK(through("f32", "i16", 1.0, beyond, {word("output_overflow", "wrap")}) ==
          Codes{32767, -32768, -32768, 32767, -32768, 0, 0, 0, 0});
    // A q31 word has more bits than a float: 2^24 + 1 is a tie and goes to even, 2^24 + 3 up.
    CHECK(through("q31", "q31", 1.0, {16777217, 16777219, 2147483647}, {word("number", "float32")}) ==
          Codes{16777216, 16777220, 2147483647});
    // u12 in: the mid-code is 0; f32 out: times output_per_input.
    CHECK(through("u12", "f32", 0.5, {2048, 2049, 0}, {}) == codes_of({0.0f, 0.5f, -1024.0f}));
}

TEST_CASE("float32: coefficients stored as multiples of 2^-f are floats of those", "[float32]") {
    const Codes in = float_noise(100, 36);
    const Codes board = in_floats(in, [](float x) { return 0.25f * x; });  // 0.3 in steps of 1/8: 2/8
    const auto stage =
        promised_stage("fir", {{"taps", std::vector<double>{0.3}}}, {{"coefficient_fraction_bits", whole(3)}});
    CHECK(run(*twin_of({stage}, "f32", "f32"), in) == board);
}
