// The arithmetic of firmware, written as firmware has it, against twins of its description, code for code. The
// functions here are the baseline of common filters and what usually goes wrong with it: plain C integers.
// Sections, one and in cascade.
#include "tests/oracle/arithmetic/firmware_words.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

struct Biquad {
    Word32 x1 = 0, x2 = 0, y1 = 0, y2 = 0;
    Word64 sum(Word32 x) const {
        return Word64{b0} * x + Word64{b1} * x1 + Word64{b2} * x2 + Word64{a1} * y1 + Word64{a2} * y2;
    }
    void remember(Word32 x, Word32 y) {
        x2 = x1;
        x1 = x;
        y2 = y1;
        y1 = y;
    }
};

void check_biquad(const FilterStage& stage, Word16 (*step)(Biquad&, Word32)) {
    const Codes in = telling_codes();
    Biquad state;
    const Codes board = firmware(in, [&](Code x) { return Code{step(state, x)}; });
    CHECK(difference(run(*twin_of({stage}), in), board) == "");
}

}  // namespace

TEST_CASE("firmware: the biquad that rounds half up and feeds back what it returns") {
    check_biquad(biquad({number("coefficient_fraction_bits", 14), word("rounding", "half-up")}),
                 [](Biquad& s, Word32 x) {
                     const Word16 y = sat16((s.sum(x) + 8192) >> 14);
                     s.remember(x, y);
                     return y;
                 });
}

TEST_CASE("firmware: the biquad that truncates, by a shift and by a division") {
    check_biquad(biquad({number("coefficient_fraction_bits", 14), word("rounding", "floor")}), [](Biquad& s, Word32 x) {
        const Word16 y = sat16(s.sum(x) >> 14);
        s.remember(x, y);
        return y;
    });
    check_biquad(biquad({number("coefficient_fraction_bits", 14), word("rounding", "toward-zero")}),
                 [](Biquad& s, Word32 x) {
                     const Word16 y = sat16(s.sum(x) / 16384);
                     s.remember(x, y);
                     return y;
                 });
}

TEST_CASE("firmware: the biquad with ties away from zero, and to even") {
    check_biquad(biquad({number("coefficient_fraction_bits", 14), word("rounding", "half-away")}),
                 [](Biquad& s, Word32 x) {
                     const Word64 acc = s.sum(x);
                     const Word16 y = sat16((acc + 8192 - (acc < 0)) >> 14);
                     s.remember(x, y);
                     return y;
                 });
    check_biquad(biquad({number("coefficient_fraction_bits", 14), word("rounding", "half-even")}),
                 [](Biquad& s, Word32 x) {
                     const Word64 acc = s.sum(x);
                     const Word16 y = sat16((acc + 8191 + ((acc >> 14) & 1)) >> 14);
                     s.remember(x, y);
                     return y;
                 });
}

TEST_CASE("firmware: the biquad that shortens each product, rounding or not") {
    check_biquad(biquad({number("coefficient_fraction_bits", 14), word("rounding", "half-up"),
                         word("rounding_at", "product"), number("accumulator_bits", 32)}),
                 [](Biquad& s, Word32 x) {
                     const auto part = [](Word32 c, Word32 v) { return (Word64{c} * v + 8192) >> 14; };
                     const Word16 y =
                         sat16(part(b0, x) + part(b1, s.x1) + part(b2, s.x2) + part(a1, s.y1) + part(a2, s.y2));
                     s.remember(x, y);
                     return y;
                 });
    check_biquad(biquad({number("coefficient_fraction_bits", 14), word("rounding", "floor"),
                         word("rounding_at", "product"), word("feedback_coefficients", "subtracted")}),
                 [](Biquad& s, Word32 x) {
                     const auto part = [](Word32 c, Word32 v) { return (Word64{c} * v) >> 14; };
                     const Word16 y =
                         sat16(part(b0, x) + part(b1, s.x1) + part(b2, s.x2) - part(-a1, s.y1) - part(-a2, s.y2));
                     s.remember(x, y);
                     return y;
                 });
}

TEST_CASE("firmware: the biquad that wraps at its output, and with it what it feeds back") {
    check_biquad(
        biquad({number("coefficient_fraction_bits", 14), word("rounding", "half-up"), word("output_overflow", "wrap")}),
        [](Biquad& s, Word32 x) {
            const auto y = static_cast<Word16>((s.sum(x) + 8192) >> 14);
            s.remember(x, y);
            return y;
        });
}

TEST_CASE("firmware: the biquad that feeds back what it had before it saturated") {
    check_biquad(biquad({number("coefficient_fraction_bits", 14), word("rounding", "half-up"), number("state_bits", 32),
                         word("state_overflow", "wrap")}),
                 [](Biquad& s, Word32 x) {
                     const auto v = static_cast<Word32>((s.sum(x) + 8192) >> 14);
                     s.remember(x, v);
                     return sat16(v);
                 });
}

TEST_CASE("firmware: the biquad that saves its fraction") {
    const Codes in = telling_codes();
    Biquad s;
    Word64 rest = 0;
    const Codes board = firmware(in, [&](Code x) {
        const Word64 acc = s.sum(x) + rest;
        const auto v = static_cast<Word32>(acc >> 14);
        rest = acc - (Word64{v} << 14);
        const Word16 y = sat16(v);
        s.remember(x, y);
        return Code{y};
    });
    const auto stage =
        biquad({number("coefficient_fraction_bits", 14), word("rounding", "floor"), word("fraction_saving", "on")});
    CHECK(difference(run(*twin_of({stage}), in), board) == "");
}

TEST_CASE("firmware: direct form II, its state saturating or wrapping") {
    const Codes in = telling_codes();
    for (const bool saturates : {true, false}) {
        Word64 w1 = 0, w2 = 0;
        const auto hold = [&](Word64 v) { return saturates ? sat16(v) : static_cast<Word16>(v); };
        const Codes board = firmware(in, [&](Code x) {
            const Word64 w = hold(((Word64{x} << 14) + a1 * w1 + a2 * w2 + 8192) >> 14);
            const Word16 y = hold((b0 * w + b1 * w1 + b2 * w2 + 8192) >> 14);
            w2 = w1;
            w1 = w;
            return Code{y};
        });
        const auto stage =
            biquad({number("coefficient_fraction_bits", 14), word("rounding", "half-up"), word("structure", "direct-2"),
                    word("output_overflow", saturates ? "saturate" : "wrap")});
        const auto twin = twin_of({stage});
        CHECK(difference(run(*twin, in), board) == "");
        // The state has the gain of the feedback, some 70: it must have been beyond its ends.
        CHECK(twin->reaches()[1].overflows > 1000);
    }
}

TEST_CASE("firmware: transposed form II with the sums kept whole, and kept short") {
    const Codes in = telling_codes();
    for (const bool is_short : {false, true}) {
        Word64 s1 = 0, s2 = 0;
        // Kept short: 32-bit states with 20 fraction bits, rounded from 29.
        const auto keep = [&](Word64 v) { return is_short ? (v + 256) >> 9 << 9 : v; };
        const Codes board = firmware(in, [&](Code x) {
            const Word16 y = sat16((s1 + Word64{b0} * x + 8192) >> 14);
            s1 = keep(s2 + Word64{b1} * x + Word64{a1} * y);
            s2 = keep(Word64{b2} * x + Word64{a2} * y);
            return Code{y};
        });
        const auto stage = is_short ? biquad({number("coefficient_fraction_bits", 14), word("rounding", "half-up"),
                                              word("structure", "transposed-2"), number("state_bits", 32),
                                              number("state_fraction_bits", 20), word("state_overflow", "wrap")})
                                    : biquad({number("coefficient_fraction_bits", 14), word("rounding", "half-up"),
                                              word("structure", "transposed-2"), number("accumulator_bits", 64)});
        CHECK(difference(run(*twin_of({stage}), in), board) == "");
    }
}

TEST_CASE("firmware: q31 products cut to their upper half, and the sum shifted up") {
    // Coefficients with 31 - 1 fraction bits: the shift after the sum is 1, and the lowest two bits are always 0.
    constexpr Word32 c[] = {3870720, 7741440, 3870720, 1957363712, -899088384};
    FiveNumbers design;
    for (int i = 0; i < 5; ++i) design.push_back((i < 3 ? 1.0 : -1.0) * std::ldexp(c[i], -30));
    Codes in = noise_codes(5000, 8, -2147483647 - 1, 2147483647);
    for (int i = 0; i < 900; ++i) in.push_back(i / 150 % 2 == 0 ? 2147483647 : -2147483647 - 1);
    const std::size_t silent = in.size();
    in.insert(in.end(), 500, 0);
    Word32 x1 = 0, x2 = 0, y1 = 0, y2 = 0;
    const Codes board = firmware(in, [&](Code x) {
        Word32 acc = 0;
        const auto add = [&](Word32 factor, Word32 v) {
            acc = static_cast<Word32>((static_cast<Word64>(static_cast<std::uint64_t>(static_cast<Word64>(acc)) << 32) +
                                       Word64{factor} * v + 0x80000000) >>
                                      32);
        };
        add(c[0], x);
        add(c[1], x1);
        add(c[2], x2);
        add(c[3], y1);
        add(c[4], y2);
        const auto y = static_cast<Word32>(static_cast<std::uint32_t>(acc) << 2);
        x2 = x1;
        x1 = x;
        y2 = y1;
        y1 = y;
        return Code{y};
    });
    const auto stage = biquads({design}, {number("coefficient_fraction_bits", 30), word("rounding", "half-up"),
                                          word("rounding_at", "product"), number("accumulator_bits", 32),
                                          number("accumulator_fraction_bits", 29), word("output_overflow", "wrap")});
    const Codes twin = run(*twin_of({stage}, "q31", "q31"), in);
    CHECK(difference(twin, board) == "");
    CHECK(std::all_of(twin.begin(), twin.end(), [](Code y) { return (y & 3) == 0; }));
    CHECK(std::any_of(twin.begin(), twin.begin() + static_cast<std::ptrdiff_t>(silent),
                      [](Code y) { return (y & 4) != 0; }));
}

TEST_CASE("firmware: a cascade whose sections pass on their words, and one that shortens at the end alone") {
    const Codes in = telling_codes();
    const FiveNumbers second{0.5, -0.25, 0.125, -0.5, 0.25};
    const auto step = [](Biquad& s, Word64 x, const int(&c)[5], int shift) {
        const Word64 acc =
            c[0] * x + c[1] * Word64{s.x1} + c[2] * Word64{s.x2} + c[3] * Word64{s.y1} + c[4] * Word64{s.y2};
        const Word64 y = (acc + (Word64{1} << (shift - 1))) >> shift;
        return y;
    };
    constexpr int first_c[] = {b0, b1, b2, a1, a2}, second_c[] = {8192, -4096, 2048, 8192, -4096};
    Biquad first, last;
    const Codes board = firmware(in, [&](Code x) {
        const Word16 middle = sat16(step(first, x, first_c, 14));
        first.remember(x, middle);
        const Word16 y = sat16(step(last, middle, second_c, 14));
        last.remember(middle, y);
        return Code{y};
    });
    const auto stage =
        biquads({low_pass, second}, {number("coefficient_fraction_bits", 14), word("rounding", "half-up")});
    CHECK(difference(run(*twin_of({stage}), in), board) == "");

    // 32-bit words of 23 fraction bits between and in the sections: the input of the first has 15.
    first = last = {};
    const Codes wide_board = firmware(in, [&](Code x) {
        const Word64 acc =
            ((first_c[0] * Word64{x} + first_c[1] * Word64{first.x1} + first_c[2] * Word64{first.x2}) << 8) +
            first_c[3] * Word64{first.y1} + first_c[4] * Word64{first.y2};
        const auto middle = static_cast<Word32>((acc + 8192) >> 14);
        first.remember(x, middle);
        const auto s = static_cast<Word32>(step(last, middle, second_c, 14));
        last.remember(middle, s);
        return Code{sat16((Word64{s} + 128) >> 8)};
    });
    const auto wide = biquads({low_pass, second}, {number("coefficient_fraction_bits", 14), word("rounding", "half-up"),
                                                   number("state_bits", 32), number("state_fraction_bits", 23),
                                                   word("state_overflow", "wrap"), word("rounding_at", "output")});
    CHECK(difference(run(*twin_of({wide}), in), wide_board) == "");
    CHECK(difference(board, wide_board) != "");
}
