#include <limits>

#include "make.hpp"

using namespace halflsb;

TEST_CASE("step: silent, then the level from at_samples to the end, then silent", "[stimuli]") {
    const auto step =
        made("step", {{"length_samples", std::int64_t{10}}, {"at_samples", std::int64_t{3}}, {"level_ratio", -0.25}});
    CHECK(step->length_samples() == 10);
    CHECK(ratios_of(*step, -2, 14) ==
          std::vector<double>{0, 0, 0, 0, 0, -0.25, -0.25, -0.25, -0.25, -0.25, -0.25, -0.25, 0, 0});
    CHECK(step->spectrum().bands.empty());
    CHECK(step->spectrum().tones.empty());
}

TEST_CASE("impulse: one sample, wherever the span begins", "[stimuli]") {
    const auto impulse = made(
        "impulse",
        {{"length_samples", std::int64_t{10}}, {"at_samples", std::int64_t{4}}, {"level_codes", std::int64_t{-3}}});
    for (std::int64_t first = -20; first < 20; ++first) {
        const auto codes = codes_of(*impulse, "q15", first, 7);
        for (std::size_t i = 0; i < codes.size(); ++i) {
            REQUIRE(codes[i] == (first + static_cast<std::int64_t>(i) == 4 ? -3 : 0));
        }
    }
}

TEST_CASE("silence: the zero of the format and nothing else", "[stimuli]") {
    const auto silence = made("silence", {{"length_samples", std::int64_t{3}}});
    CHECK(silence->length_samples() == 3);
    CHECK(codes_of(*silence, "u12", -1, 5) == std::vector<Code>(5, 2048));
    CHECK(codes_of(*silence, "f32", 0, 3) == std::vector<Code>(3, 0));
    CHECK(silence->spectrum().bands.empty());
    CHECK(refusal("silence", {{"length_samples", std::int64_t{3}}, {"level_ratio", 0.5}}) ==
          "level_ratio: \"silence\" has no such parameter\n  parameters: length_samples, add");
}

TEST_CASE("step: without a level it is half of full scale", "[stimuli]") {
    CHECK(ratios_of(*made("step", {{"length_samples", std::int64_t{1}}}), 0, 1)[0] == 0.5);
}

TEST_CASE("step: a level of 1 saturates at the top code and -1 reaches the lowest, in every format", "[stimuli]") {
    struct Row {
        const char* format;
        Code top, bottom, half;
    };
    constexpr Code most = std::numeric_limits<Code>::max(), least = std::numeric_limits<Code>::min();
    for (const Row& row :
         {Row{"q15", 32767, -32768, 16384}, Row{"i16", 32767, -32768, 16384}, Row{"q31", most, least, 1 << 30},
          Row{"i32", most, least, 1 << 30}, Row{"f32", 0x3f800000, static_cast<Code>(0xbf800000), 0x3f000000}}) {
        INFO(row.format);
        const auto level = [&](double ratio) {
            const auto step =
                made("step", {{"length_samples", std::int64_t{1}}, {"level_ratio", ratio}}, 1.0, row.format);
            return codes_of(*step, row.format, 0, 1)[0];
        };
        CHECK(level(1.0) == row.top);
        CHECK(level(-1.0) == row.bottom);
        CHECK(level(0.5) == row.half);
        CHECK(level(0.0) == 0);
    }
}

TEST_CASE("step: every level in codes is sent as that code, the ends of the word included", "[stimuli]") {
    for (const auto format : {"q7", "q15", "q31", "i8", "i16", "i24", "i32", "u8", "u12", "u16"}) {
        const std::int64_t zero = zero_code(format_named(format));
        const std::int64_t end = std::int64_t{1} << (format_named(format).word_bits - 1);
        for (const std::int64_t code :
             {-end, -end + 1, std::int64_t{-1}, std::int64_t{0}, std::int64_t{1}, end - 2, end - 1}) {
            const auto step = made("step", {{"length_samples", std::int64_t{2}}, {"level_codes", code}}, 1.0, format);
            for (const auto rounding : rounding_names()) {
                CHECK(codes_of(*step, format, 1, 1, *rounding_from(rounding))[0] == zero + code);
            }
        }
    }
}

TEST_CASE("fill: indices at both ends of their type are silent", "[stimuli]") {
    const auto step = made("step", {{"length_samples", std::int64_t{10'000'000'000}}});
    constexpr auto lowest = std::numeric_limits<std::int64_t>::min();
    constexpr auto highest = std::numeric_limits<std::int64_t>::max();
    CHECK(ratios_of(*step, lowest, 3) == std::vector<double>{0, 0, 0});
    CHECK(ratios_of(*step, highest - 2, 3) == std::vector<double>{0, 0, 0});
    CHECK(ratios_of(*step, 9'999'999'999, 3) == std::vector<double>{0.5, 0, 0});
    CHECK(ratios_of(*step, 5, 0).empty());
}
