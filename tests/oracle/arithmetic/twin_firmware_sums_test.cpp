// As twin_firmware_test: FIRs and moving averages, plain C integers against twins, code for code.
#include <algorithm>
#include <array>

#include "tests/oracle/arithmetic/firmware_words.hpp"

using namespace halflsb;
using namespace halflsb::testing;

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
