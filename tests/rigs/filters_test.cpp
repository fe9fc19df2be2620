// rigs/filters against closed forms, and the variants that faults are made of against rigs/filters.
#include <catch2/catch.hpp>
#include <cstdint>
#include <initializer_list>
#include <limits>
#include <random>
#include <vector>

#include "rigs/filters/biquad_q31.h"
#include "rigs/filters/fir.h"
#include "rigs/filters/fixed_point.h"
#include "rigs/filters/moving_average.h"
#include "rigs/virtual-board/clean_filters.hpp"
#include "rigs/virtual-board/filter_set.hpp"

using namespace halflsb::board;

namespace {

constexpr std::uint32_t seed = 20261201;

bool is_narrow(const FilterParts& parts) { return parts.format == HALFLSB_Q15 || parts.format == HALFLSB_I16; }

/// Full-scale noise with both ends of the range in it.
template <typename Word>
std::vector<Word> noise(std::size_t count) {
    std::mt19937 generator(seed);
    std::vector<Word> codes(count);
    for (Word& code : codes) code = static_cast<Word>(static_cast<std::int32_t>(generator()));
    codes[count / 3] = std::numeric_limits<Word>::min();
    codes[count / 2] = std::numeric_limits<Word>::max();
    return codes;
}

template <typename Word>
std::vector<Word> in_blocks(const FilterParts& parts, std::vector<Word> codes, std::size_t block) {
    parts.reset();
    for (std::size_t at = 0; at < codes.size(); at += block) {
        const auto count = static_cast<std::uint16_t>(std::min(block, codes.size() - at));
        parts.process(codes.data() + at, codes.data() + at, count);  // in place, as the kit does
    }
    return codes;
}

}  // namespace

TEST_CASE("filters: any split into blocks gives the same codes", "[rigs]") {
    AverageSetting average;
    for (const FilterParts& parts : all_filters({}, average)) {
        INFO(parts.name << ", seed " << seed);
        if (is_narrow(parts)) {
            const auto codes = noise<std::int16_t>(1000);
            const auto whole = in_blocks(parts, codes, 1000);
            for (std::size_t block : {1u, 7u, 999u}) CHECK(in_blocks(parts, codes, block) == whole);
        } else if (parts.format != HALFLSB_F32) {
            const auto codes = noise<std::int32_t>(1000);
            const auto whole = in_blocks(parts, codes, 1000);
            for (std::size_t block : {1u, 7u, 999u}) CHECK(in_blocks(parts, codes, block) == whole);
        }
    }
}

TEST_CASE("variants: without a deviation they give the codes of the clean filter", "[rigs]") {
    AverageSetting average;
    int compared = 0;
    for (const FilterParts& parts : all_filters({}, average)) {
        if (!parts.variant) continue;
        INFO(parts.name << ", seed " << seed);
        const auto variant = parts.variant(Deviation{});
        variant->reset();
        if (is_narrow(parts)) {
            const auto codes = noise<std::int16_t>(5000);
            const auto clean = in_blocks(parts, codes, 64);
            std::size_t differing = 0;
            for (std::size_t i = 0; i < codes.size(); ++i) differing += variant->step(codes[i]) != clean[i] ? 1 : 0;
            CHECK(differing == 0);
        } else {
            const auto codes = noise<std::int32_t>(5000);
            const auto clean = in_blocks(parts, codes, 64);
            std::size_t differing = 0;
            for (std::size_t i = 0; i < codes.size(); ++i) differing += variant->step(codes[i]) != clean[i] ? 1 : 0;
            CHECK(differing == 0);
        }
        ++compared;
    }
    CHECK(compared == 8);
}

TEST_CASE("fixed point: dropping bits rounds halves upward on both sides of a tie", "[rigs]") {
    CHECK(round_half_up(3, 1) == 2);
    CHECK(round_half_up(-3, 1) == -1);
    CHECK(round_half_up(8191, 14) == 0);
    CHECK(round_half_up(8192, 14) == 1);
    CHECK(round_half_up(-8192, 14) == 0);
    CHECK(round_half_up(-8193, 14) == -1);
    CHECK(saturate_q15(32768) == 32767);
    CHECK(saturate_q15(-32769) == -32768);
    CHECK(saturate_q31(std::int64_t{1} << 31) == std::numeric_limits<std::int32_t>::max());
    CHECK(saturate_q31(-(std::int64_t{1} << 31) - 1) == std::numeric_limits<std::int32_t>::min());
}

TEST_CASE("moving average: an impulse gives points equal codes, and both rails stay on the rail", "[rigs]") {
    for (std::uint16_t points : std::initializer_list<std::uint16_t>{1, 2, 7, 16, 255, 4096, 16384}) {
        INFO(points << " points");
        std::vector<std::int16_t> ring(points), codes(2u * points + 2u);
        moving_average_q15 filter{};
        moving_average_q15_init(&filter, ring.data(), points);
        codes[0] = static_cast<std::int16_t>(points);  // the average of one such among zeros is exactly 1
        moving_average_q15_process(&filter, codes.data(), codes.data(), static_cast<std::uint16_t>(codes.size()));
        for (std::size_t i = 0; i < codes.size(); ++i) CHECK(codes[i] == (i < points ? 1 : 0));
        for (std::int16_t rail : {std::int16_t{32767}, std::int16_t{-32768}}) {
            codes.assign(codes.size(), rail);
            moving_average_q15_reset(&filter);
            moving_average_q15_process(&filter, codes.data(), codes.data(), static_cast<std::uint16_t>(codes.size()));
            CHECK(codes.back() == rail);
        }
    }
}

TEST_CASE("FIR: the response to an impulse of half full scale is half of each tap, halves upward", "[rigs]") {
    const std::int16_t taps[5] = {3, -3, 32767, -32768, 1};
    std::int16_t ring[5], codes[6] = {16384, 0, 0, 0, 0, 0};
    fir_q15 filter{};
    fir_q15_init(&filter, taps, ring, 5);
    fir_q15_process(&filter, codes, codes, 6);
    CHECK(std::vector<std::int16_t>(codes, codes + 6) == std::vector<std::int16_t>{2, -1, 16384, -16384, 1, 0});
}

TEST_CASE("FIR: -1 times -1 saturates at the top code", "[rigs]") {
    const std::int16_t tap = -32768;
    std::int16_t ring, code = -32768;
    fir_q15 filter{};
    fir_q15_init(&filter, &tap, &ring, 1);
    fir_q15_process(&filter, &code, &code, 1);
    CHECK(code == 32767);
}

TEST_CASE("q31 biquad: five products of the largest size are summed exactly", "[rigs]") {
    // -2 for each coefficient and -1 for each sample: the sum is 10, five times beyond the range of 64 bits.
    constexpr std::int32_t bottom = std::numeric_limits<std::int32_t>::min();
    constexpr std::int32_t top = std::numeric_limits<std::int32_t>::max();
    const biquad_q31_coefficients same = {bottom, bottom, bottom, bottom, bottom};
    biquad_q31_state state{};
    biquad_q31 filter{};
    biquad_q31_init(&filter, &same, &state, 1);
    state = {bottom, bottom, bottom, bottom};
    std::int32_t code = bottom;
    biquad_q31_process(&filter, &code, &code, 1);
    CHECK(code == top);

    // Large products that nearly cancel: b1 x1 + a1 y1 = 2 - 2 (1 - 2^-31) is 2 codes, and b2, a2 the same. With
    // b0 x = 1/2 x 5 = 2.5 codes the sum is 6.5, upward to 7.
    const biquad_q31_coefficients opposite = {1 << 29, bottom, bottom, bottom, bottom};
    filter.coefficients = &opposite;
    state = {bottom, bottom, top, top};
    code = 5;
    biquad_q31_process(&filter, &code, &code, 1);
    CHECK(code == 7);
}

TEST_CASE("offered filters: a fault that is not chosen leaves the clean filter", "[rigs]") {
    AverageSetting average;
    OfferedFilter offered(all_filters({}, average)[0], Faults{});
    std::vector<std::int16_t> codes(32, 1600);
    offered.reset();
    offered.process(codes.data(), codes.data(), 32);
    for (int i = 0; i < 32; ++i) CHECK(codes[static_cast<std::size_t>(i)] == std::min(1600, 100 * (i + 1)));
}
