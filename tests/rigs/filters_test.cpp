// rigs/filters against closed forms, and the variants that faults are made of against rigs/filters.
#include <algorithm>
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
#include "rigs/filters/moving_average_offset.h"
#include "rigs/virtual-board/clean_averages.hpp"
#include "rigs/virtual-board/clean_decisions.hpp"
#include "rigs/virtual-board/clean_filters.hpp"
#include "rigs/virtual-board/filter_set.hpp"

using namespace halflsb::board;

namespace {

constexpr std::uint32_t seed = 20261201;

/// Words of noise over the whole range, both ends in it; bytes as they lie in memory.
std::vector<std::uint8_t> noise(const FilterParts& parts, std::size_t instants) {
    std::mt19937 generator(seed);
    const std::size_t count = instants * parts.channel_count();
    std::vector<std::uint8_t> words(count * word_bytes(parts.format));
    const std::uint32_t mask = 0xFFFFFFFFu >> (32 - value_bits(parts.format));
    const std::int32_t bottom = zero_code(parts.format) - static_cast<std::int32_t>(mask / 2) - 1;
    for (std::size_t i = 0; i < count; ++i) {
        put_code(words.data(), i, parts.format,
                 static_cast<std::int32_t>(std::int64_t{bottom} + static_cast<std::int64_t>(generator() & mask)));
    }
    put_code(words.data(), count / 3, parts.format, bottom);
    put_code(words.data(), count / 2, parts.format, static_cast<std::int32_t>(std::int64_t{bottom} + mask));
    return words;
}

std::vector<std::uint8_t> in_blocks(const FilterParts& parts, std::vector<std::uint8_t> words, std::size_t block) {
    const std::size_t instant = word_bytes(parts.format) * parts.channel_count();
    parts.reset();
    std::vector<std::uint8_t> returned(words.size() * parts.up);  // where the rate changes
    std::size_t written = 0;
    for (std::size_t at = 0; at < words.size(); at += block * instant) {
        const auto count = static_cast<std::uint16_t>(std::min(block, (words.size() - at) / instant));
        if (parts.process_rate) {
            written += parts.process_rate(words.data() + at, returned.data() + written * instant, count);
        } else {
            parts.process(words.data() + at, words.data() + at, count);  // in place, as the kit does
        }
    }
    if (!parts.process_rate) return words;
    returned.resize(written * instant);
    return returned;
}

}  // namespace

TEST_CASE("filters: any split into blocks gives the same codes", "[rigs]") {
    AverageSetting average;
    for (const FilterParts& parts : every_filter({}, average)) {
        if (is_float(parts.format)) continue;  // noise of its bits is no signal
        INFO(parts.name << ", seed " << seed);
        const auto words = noise(parts, 1000);
        const auto whole = in_blocks(parts, words, 1000);
        CHECK(whole != words);
        for (std::size_t block : {1u, 7u, 999u}) CHECK(in_blocks(parts, words, block) == whole);
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
        const auto words = noise(parts, 5000);
        const auto clean = in_blocks(parts, words, 64);
        std::size_t differing = 0;
        for (std::size_t i = 0; i < 5000; ++i) {
            const std::int32_t y = variant->step(code_at(words.data(), i, parts.format));
            differing += y != code_at(clean.data(), i, parts.format) ? 1 : 0;
        }
        CHECK(differing == 0);
        ++compared;
    }
    CHECK(compared == 17);
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

TEST_CASE("averages of offset binary: the mid-code is zero, ties go up, both rails stay on the rail", "[rigs]") {
    AverageSetting average;
    int seen = 0;
    for (const FilterParts& parts : all_filters({}, average)) {
        const std::int32_t middle = zero_code(parts.format);
        if (middle == 0) continue;
        INFO(parts.name);
        ++seen;
        const auto last_of = [&](std::int32_t first, std::int32_t others) {
            std::vector<std::uint8_t> words(16 * word_bytes(parts.format));
            for (std::size_t i = 0; i < 16; ++i) put_code(words.data(), i, parts.format, i == 0 ? first : others);
            return code_at(in_blocks(parts, words, 16).data(), 15, parts.format);
        };
        CHECK(last_of(middle, middle) == middle);
        CHECK(last_of(0, 0) == 0);
        CHECK(last_of(2 * middle - 1, 2 * middle - 1) == 2 * middle - 1);
        CHECK(last_of(middle + 7, middle) == middle);
        CHECK(last_of(middle + 8, middle) == middle + 1);
        CHECK(last_of(middle - 8, middle) == middle);
        CHECK(last_of(middle - 9, middle) == middle - 1);
    }
    CHECK(seen == 4);
}

TEST_CASE("averages of 12 bits: what stands beside the number is not looked at and comes back as zeros", "[rigs]") {
    std::int16_t ring[16];
    moving_average_q15 filter{};
    std::vector<std::uint16_t> right(16, 0xF123), left(16, 0x123F);
    moving_average_q15_init(&filter, ring, 16);
    moving_average_u12_process(&filter, right.data(), right.data(), 16);
    CHECK(right.back() == 0x0123);
    moving_average_q15_reset(&filter);
    moving_average_u12_left_process(&filter, left.data(), left.data(), 16);
    CHECK(left.back() == 0x1230);
}

TEST_CASE("averages of 24 bits: the three layouts give the same codes, and the sign is extended", "[rigs]") {
    constexpr std::size_t count = 3000;
    const halflsb_format number = HALFLSB_I24;
    const Format left = number | HALFLSB_LEFT, packed = number | HALFLSB_PACKED;
    const FilterParts whole = average_of("", number, 16);
    const auto words = noise(whole, count);
    const auto expected = in_blocks(whole, words, 64);
    for (const Format layout : {left, packed}) {
        const FilterParts parts = average_of("", layout, 16);
        std::vector<std::uint8_t> other(count * word_bytes(layout));
        for (std::size_t i = 0; i < count; ++i) put_code(other.data(), i, layout, code_at(words.data(), i, number));
        other = in_blocks(parts, other, 64);
        std::size_t differing = 0;
        for (std::size_t i = 0; i < count; ++i) {
            differing += code_at(other.data(), i, layout) != code_at(expected.data(), i, number) ? 1 : 0;
        }
        CHECK(differing == 0);
    }
    std::uint8_t minus_one[3 * 16];
    std::fill(std::begin(minus_one), std::end(minus_one), std::uint8_t{0xFF});
    average_of("", packed, 16).process(minus_one, minus_one, 16);
    CHECK(minus_one[45] == 0xFF);  // 16 times -1: the mean is -1
    CHECK(minus_one[47] == 0xFF);
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
