// As twin_firmware_test: one-poles, comb and DC blocker, and a chain of kinds, plain C integers against twins, code for
// code.
#include <algorithm>
#include <array>

#include "tests/oracle/arithmetic/firmware_words.hpp"

using namespace halflsb;
using namespace halflsb::testing;

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
