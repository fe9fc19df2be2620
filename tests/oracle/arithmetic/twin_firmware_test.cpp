// The arithmetic of firmware, written as firmware has it, against twins of its description, code for code. The
// functions here are the baseline of common filters and what usually goes wrong with it: plain C integers.
#include <algorithm>
#include <array>
#include <cmath>

#include "tests/oracle/arithmetic/twin_support.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

using Word16 = std::int16_t;
using Word32 = std::int32_t;
using Word64 = std::int64_t;

Word16 sat16(Word64 v) { return static_cast<Word16>(v > 32767 ? 32767 : v < -32768 ? -32768 : v); }

template <class Step>
Codes firmware(const Codes& in, Step step) {
    Codes out;
    for (const Code code : in) out.push_back(step(code));
    return out;
}

/// Where two records part, in words; nothing where they do not.
std::string difference(const Codes& twin, const Codes& board) {
    if (twin.size() != board.size()) return "lengths";
    for (std::size_t i = 0; i < twin.size(); ++i) {
        if (twin[i] == board[i]) continue;
        return "sample " + std::to_string(i) + ": twin " + std::to_string(twin[i]) + ", board " +
               std::to_string(board[i]);
    }
    return "";
}

Given word(const char* name, const char* value) { return {name, std::string(value)}; }
Given number(const char* name, int value) { return {name, whole(value)}; }

// A low-pass at 0.02 of the rate, Q 0.7: S = 14 and feedback that sums to almost one.
constexpr double q14 = 1.0 / 16384.0;
constexpr int b0 = 59, b1 = 118, b2 = 59, a1 = 29867, a2 = -13719;
const FiveNumbers low_pass{b0 * q14, b1* q14, b2* q14, -a1* q14, -a2* q14};

FilterStage biquad(std::initializer_list<Given> promised) { return biquads({low_pass}, promised); }

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

TEST_CASE("firmware: a fir with a 64-bit sum, and with one of 32 bits that wraps") {
    const Codes in = telling_codes();
    constexpr std::array<int, 8> h{9000, -21000, 30000, -12000, 7000, 32767, -32768, 15000};
    std::vector<double> taps;
    for (const int tap : h) taps.push_back(tap / 32768.0);
    for (const int bits : {64, 32}) {
        std::array<Word16, 8> past{};
        std::size_t position = 0;
        const Codes board = firmware(in, [&](Code x) {
            past[position] = static_cast<Word16>(x);
            Word64 acc = 0;
            for (std::size_t i = 0; i < h.size(); ++i) {
                acc += Word64{h[i]} * past[(position + h.size() - i) % h.size()];
                if (bits == 32) acc = static_cast<Word32>(acc);
            }
            position = (position + 1) % h.size();
            return Code{sat16((acc + (1 << 14)) >> 15)};
        });
        const auto stage = promised_stage(
            "fir", {{"taps", taps}},
            {number("coefficient_fraction_bits", 15), word("rounding", "half-up"), number("accumulator_bits", bits)});
        const auto twin = twin_of({stage});
        CHECK(difference(run(*twin, in), board) == "");
        CHECK((twin->reaches()[0].overflows > 0) == (bits == 32));
    }
}

TEST_CASE("firmware: the order of a fir's sum shows where partial sums saturate") {
    const Codes in = telling_codes();
    constexpr std::array<int, 4> h{62000, 30000, -62000, -25000};
    std::vector<double> taps;
    for (const int tap : h) taps.push_back(tap / 32768.0);
    Codes boards[2];
    for (const bool oldest_first : {false, true}) {
        std::array<Word64, 4> past{};
        boards[oldest_first] = firmware(in, [&](Code x) {
            std::rotate(past.begin(), past.end() - 1, past.end());
            past[0] = x;
            Word64 acc = 0;
            for (std::size_t i = 0; i < 4; ++i) {
                const std::size_t k = oldest_first ? 3 - i : i;
                acc = std::clamp<Word64>(acc + h[k] * past[k], -2147483648LL, 2147483647LL);
            }
            return Code{sat16(acc >> 15)};
        });
        const auto stage = promised_stage("fir", {{"taps", taps}},
                                          {number("coefficient_fraction_bits", 15), word("rounding", "floor"),
                                           number("accumulator_bits", 32), word("accumulator_overflow", "saturate"),
                                           word("summation", oldest_first ? "oldest-first" : "newest-first")});
        CHECK(difference(run(*twin_of({stage}), in), boards[oldest_first]) == "");
    }
    CHECK(difference(boards[0], boards[1]) != "");
}

TEST_CASE("firmware: a running sum of 16, by shift and by division") {
    const Codes in = telling_codes();
    for (const bool shifts : {true, false}) {
        std::array<Word32, 16> past{};
        std::size_t position = 0;
        Word32 sum = 0;
        const Codes board = firmware(in, [&](Code x) {
            sum -= past[position];
            past[position] = x;
            sum += x;
            position = (position + 1) % past.size();
            return Code{static_cast<Word16>(shifts ? sum >> 4 : sum / 16)};
        });
        const auto stage = promised_stage(
            "moving-average", {number("points", 16)},
            {word("rounding", shifts ? "floor" : "toward-zero"), word("division", shifts ? "shift" : "divide")});
        CHECK(difference(run(*twin_of({stage}), in), board) == "");
    }
}

TEST_CASE("firmware: a running sum in 16 bits folds") {
    const Codes in = telling_codes();
    std::array<Word16, 16> past{};
    std::size_t position = 0;
    Word16 sum = 0;
    const Codes board = firmware(in, [&](Code x) {
        sum = static_cast<Word16>(sum - past[position]);
        past[position] = static_cast<Word16>(x);
        sum = static_cast<Word16>(sum + x);
        position = (position + 1) % past.size();
        return Code{sum >> 4};
    });
    const auto stage = promised_stage("moving-average", {number("points", 16)},
                                      {word("rounding", "floor"), number("accumulator_bits", 16)});
    CHECK(difference(run(*twin_of({stage}), in), board) == "");
}

TEST_CASE("firmware: an average of 12 by a reciprocal, the sum taken afresh, and one that keeps what division leaves") {
    const Codes in = telling_codes();
    std::array<Word32, 12> past{};
    std::size_t position = 0;
    const Codes by_reciprocal = firmware(in, [&](Code x) {
        past[position] = x;
        position = (position + 1) % past.size();
        Word32 sum = 0;
        for (const Word32 each : past) sum += each;
        return Code{static_cast<Word16>((Word64{sum} * 5461 + 32768) >> 16)};  // 65536 / 12 = 5461.33
    });
    const auto stage = promised_stage("moving-average", {number("points", 12)},
                                      {word("structure", "fresh-sum"), word("rounding", "half-up"),
                                       word("division", "reciprocal"), number("coefficient_fraction_bits", 16)});
    CHECK(difference(run(*twin_of({stage}), in), by_reciprocal) == "");

    past = {};
    position = 0;
    Word32 sum = 0, rest = 0;
    const Codes saving = firmware(in, [&](Code x) {
        sum += x - past[position];
        past[position] = x;
        position = (position + 1) % past.size();
        const Word32 numerator = sum + rest;
        const Word32 y = numerator / 12;
        rest = numerator % 12;
        return Code{sat16(y)};
    });
    const auto saver = promised_stage("moving-average", {number("points", 12)},
                                      {word("rounding", "toward-zero"), word("fraction_saving", "on")});
    CHECK(difference(run(*twin_of({saver}), in), saving) == "");
}

TEST_CASE("firmware: an average whose output words are finer or coarser than its input's") {
    const Codes in = noise_codes(3000, 5, -100, 100);
    std::array<Word32, 5> past{};
    std::size_t position = 0;
    Word32 sum = 0;
    // i16 codes out of i8 codes, 64 of them to one: 6 fraction bits more.
    const auto finer = promised_stage("moving-average", {number("points", 5)}, {word("rounding", "toward-zero")});
    const Codes board = firmware(in, [&](Code x) {
        sum += x - past[position];
        past[position] = x;
        position = (position + 1) % past.size();
        return Code{sum * 64 / 5};
    });
    CHECK(difference(run(*twin_of({finer}, "i8", "i16", 64.0), in), board) == "");
    // q15 in, q7 out: the sum of 5 is divided by 5 2^8.
    past = {};
    sum = 0;
    position = 0;
    const Codes wide = noise_codes(3000, 6);
    const Codes short_board = firmware(wide, [&](Code x) {
        sum += x - past[position];
        past[position] = x;
        position = (position + 1) % past.size();
        return Code{sum / 1280};
    });
    CHECK(difference(run(*twin_of({finer}, "q15", "q7"), wide), short_board) == "");
}

TEST_CASE("firmware: y += (x - y) >> k and its division, with the dead zone of each") {
    const Codes in = telling_codes();
    for (const bool shifts : {true, false}) {
        Word32 y = 0;
        const Codes board = firmware(in, [&](Code x) {
            y += shifts ? (x - y) >> 6 : (x - y) / 64;
            return Code{y};
        });
        const auto stage =
            promised_stage("one-pole", {number("shift_bits", 6)}, {word("rounding", shifts ? "floor" : "toward-zero")});
        CHECK(difference(run(*twin_of({stage}), in), board) == "");
    }
    // 2^k - 1 short of a rising step of 16384, and there from above.
    const auto stage = promised_stage("one-pole", {number("shift_bits", 6)}, {word("rounding", "floor")});
    const auto twin = twin_of({stage});
    CHECK(run(*twin, Codes(3000, 16384)).back() == 16321);
    run(*twin, Codes(3000, 32767));
    CHECK(run(*twin, Codes(3000, 16384)).back() == 16384);
}

TEST_CASE("firmware: s += x - (s >> k), the state k bits wider") {
    const Codes in = telling_codes();
    Word32 s = 0;
    const Codes board = firmware(in, [&](Code x) {
        s += x - (s >> 5);
        return Code{s >> 5};
    });
    const auto stage = promised_stage("one-pole", {number("shift_bits", 5)},
                                      {word("rounding", "floor"), word("structure", "leak"), number("state_bits", 32),
                                       number("state_fraction_bits", 20)});
    CHECK(difference(run(*twin_of({stage}), in), board) == "");
}

TEST_CASE("firmware: a one-pole by a coefficient, by its difference and as a section") {
    const Codes in = telling_codes();
    Word64 y = 0, s = 0;
    const Codes by_difference = firmware(in, [&](Code x) {
        y += (3277 * (x - y) + 16384) >> 15;
        return Code{static_cast<Word16>(y)};
    });
    const auto stage = promised_stage("one-pole", {{"coefficient", 0.1}},
                                      {word("rounding", "half-up"), number("coefficient_fraction_bits", 15)});
    CHECK(difference(run(*twin_of({stage}), in), by_difference) == "");
    const Codes as_section = firmware(in, [&](Code x) {
        s = sat16((3277 * Word64{x} + (32768 - 3277) * s + 16384) >> 15);
        return Code{static_cast<Word16>(s)};
    });
    const auto section = promised_stage(
        "one-pole", {{"coefficient", 0.1}},
        {word("rounding", "half-up"), number("coefficient_fraction_bits", 15), word("structure", "direct-1")});
    CHECK(difference(run(*twin_of({section}), in), as_section) == "");
    // One rounding of the same number, as long as nothing saturates.
    CHECK(as_section == by_difference);
}

TEST_CASE("firmware: a comb with feedback") {
    const Codes in = telling_codes();
    std::array<Word32, 24> past_in{}, past_out{};
    std::size_t position = 0;
    const Codes board = firmware(in, [&](Code x) {
        const Word64 acc = 20000 * Word64{x} - 9000 * Word64{past_in[position]} + 25000 * Word64{past_out[position]};
        const Word16 y = sat16(acc >> 15);
        past_in[position] = x;
        past_out[position] = y;
        position = (position + 1) % past_in.size();
        return Code{y};
    });
    const auto stage = promised_stage("comb",
                                      {number("delay_samples", 24),
                                       {"direct", 20000 / 32768.0},
                                       {"forward", -9000 / 32768.0},
                                       {"feedback", -25000 / 32768.0}},
                                      {word("rounding", "floor"), number("coefficient_fraction_bits", 15)});
    CHECK(difference(run(*twin_of({stage}), in), board) == "");
}

TEST_CASE("firmware: a dc blocker with a wide state") {
    const Codes in = telling_codes();
    Word32 x1 = 0;
    Word64 s = 0;  // 15 + 8 fraction bits in 32
    const Codes board = firmware(in, [&](Code x) {
        const Word64 acc = ((Word64{x} - x1) << 23) + 32440 * s;
        s = std::clamp<Word64>((acc + 16384) >> 15, -2147483648LL, 2147483647LL);
        x1 = x;
        return Code{sat16((s + 128) >> 8)};
    });
    const auto stage =
        promised_stage("dc-blocker", {{"pole", 32440 / 32768.0}},
                       {word("rounding", "half-up"), number("coefficient_fraction_bits", 15), number("state_bits", 32),
                        number("state_fraction_bits", 23), word("state_overflow", "saturate")});
    CHECK(difference(run(*twin_of({stage}), in), board) == "");
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

TEST_CASE("firmware: offset-binary input, and a chain with words between") {
    const Codes in = noise_codes(4000, 12, 0, 4095);
    std::array<Word32, 4> past{};
    std::size_t position = 0;
    Word32 sum = 0, y = 0;
    const Codes board = firmware(in, [&](Code raw) {
        const Word32 x = raw - 2048;
        sum += x - past[position];
        past[position] = x;
        position = (position + 1) % past.size();
        const Word32 middle = sum >> 2;
        y += (middle - y) >> 3;
        return y;
    });
    const auto average = promised_stage("moving-average", {number("points", 4)},
                                        {word("rounding", "floor"), word("stage_format", "i16")});
    const auto smooth = promised_stage("one-pole", {number("shift_bits", 3)}, {word("rounding", "floor")});
    CHECK(difference(run(*twin_of({average, smooth}, "u12", "i16"), in), board) == "");
    const Codes offset_out = run(*twin_of({average, smooth}, "u12", "u12"), in);
    Codes offset_board = board;
    for (Code& code : offset_board) code += 2048;
    CHECK(difference(offset_out, offset_board) == "");
}
