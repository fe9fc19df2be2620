// The filters of rigs/filters with feedback of the first order or at one delay, against closed forms.
#include <catch2/catch.hpp>
#include <cstdint>
#include <initializer_list>
#include <vector>

#include "rigs/filters/comb.h"
#include "rigs/filters/dc_blocker.h"
#include "rigs/filters/one_pole.h"

TEST_CASE("one-pole: a constant is reached exactly, from both sides, and the rails do not overflow", "[rigs]") {
    for (const auto process : {one_pole_q15_process, one_pole_q15_process_rounded}) {
        for (std::uint8_t shift : std::initializer_list<std::uint8_t>{1, 4, 15}) {
            one_pole_q15 filter{};
            one_pole_q15_init(&filter, shift);
            for (std::int16_t level : std::initializer_list<std::int16_t>{32767, -32768, 5, -5, 0, 32767}) {
                INFO("shift " << int{shift} << ", level " << level);
                std::int16_t y = 0;
                // 12 time constants of 2^shift, and the last codes one at a time.
                for (std::int32_t n = 0; n < (std::int32_t{16} << shift) + 64; ++n) process(&filter, &level, &y, 1);
                CHECK(y == level);
            }
        }
    }
}

TEST_CASE("one-pole: the first step floors or rounds at the tie", "[rigs]") {
    const auto first = [](auto process, std::int16_t x) {
        one_pole_q15 filter{};
        one_pole_q15_init(&filter, 4);
        process(&filter, &x, &x, 1);
        return x;
    };
    CHECK(first(one_pole_q15_process, 15) == 0);
    CHECK(first(one_pole_q15_process, 16) == 1);
    CHECK(first(one_pole_q15_process, -1) == -1);
    CHECK(first(one_pole_q15_process_rounded, 7) == 0);
    CHECK(first(one_pole_q15_process_rounded, 8) == 1);
    CHECK(first(one_pole_q15_process_rounded, -8) == 0);
    CHECK(first(one_pole_q15_process_rounded, -9) == -1);
}

TEST_CASE("DC blocker: a constant comes to rest at exactly 0, a full-scale step saturates and recovers", "[rigs]") {
    dc_blocker_q15 filter{};
    dc_blocker_q15_init(&filter, 128);
    std::int16_t y = 0;
    for (std::int16_t level : std::initializer_list<std::int16_t>{12345, -12345, 1, -1}) {
        dc_blocker_q15_reset(&filter);
        for (int n = 0; n < 20000; ++n) dc_blocker_q15_process(&filter, &level, &y, 1);
        CHECK(y == 0);
    }
    // From -1 to just below 1 the output would be nearly 2; it holds the rail until the state has come down to it.
    dc_blocker_q15_reset(&filter);
    std::int16_t x = -32768;
    for (int n = 0; n < 20000; ++n) dc_blocker_q15_process(&filter, &x, &y, 1);
    CHECK(y == 0);
    x = 32767;
    int on_the_rail = 0;
    do {
        dc_blocker_q15_process(&filter, &x, &y, 1);
        ++on_the_rail;
    } while (y == 32767);
    // 65535 (1 - 1/256)^n is below 32767 from n = 177.1 on, n counted from 0.
    CHECK(on_the_rail - 1 == 178);
}

TEST_CASE("comb: the response to an impulse, echo by echo", "[rigs]") {
    const comb_q15_coefficients coefficients = {8192, 4096, 4096};
    std::int16_t past_in[3], past_out[3];
    comb_q15 filter{};
    comb_q15_init(&filter, &coefficients, past_in, past_out, 3);
    std::int16_t codes[10] = {16384};
    comb_q15_process(&filter, codes, codes, 10);
    // 1/2, then 1/4 + 1/8, then a quarter of it each time.
    CHECK(std::vector<std::int16_t>(codes, codes + 10) ==
          std::vector<std::int16_t>{8192, 0, 0, 6144, 0, 0, 1536, 0, 0, 384});
}

TEST_CASE("comb: a tie goes up, and what saturated is what comes back", "[rigs]") {
    std::int16_t past_in[1], past_out[1], code = 1;
    const comb_q15_coefficients half = {8192, 0, 0}, loud = {32767, 0, 16383};
    comb_q15 filter{};
    comb_q15_init(&filter, &half, past_in, past_out, 1);
    comb_q15_process(&filter, &code, &code, 1);
    CHECK(code == 1);
    code = -1;
    comb_q15_process(&filter, &code, &code, 1);
    CHECK(code == 0);
    comb_q15_init(&filter, &loud, past_in, past_out, 1);
    std::int16_t codes[2] = {32767, 0};
    comb_q15_process(&filter, codes, codes, 2);
    CHECK(codes[0] == 32767);
    CHECK(codes[1] == 32765);  // 32767 x 16383 / 16384 = 32765.0001
}
