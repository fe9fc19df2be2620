#include "stimuli/sample_format.hpp"

#include <array>
#include <bit>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "make.hpp"

using namespace halflsb;

namespace {

constexpr double infinity = std::numeric_limits<double>::infinity();

}  // namespace

TEST_CASE("sample format: the table has eleven formats with the numbers of docs/wire.md", "[stimuli]") {
    const std::array<std::string_view, 11> names = {"q15", "q31", "i16", "i32", "f32", "q7",
                                                    "i8",  "i24", "u8",  "u12", "u16"};
    REQUIRE(sample_formats().size() == names.size());
    for (std::size_t i = 0; i < names.size(); ++i) {
        CHECK(sample_formats()[i].name == names[i]);
        CHECK(sample_format(names[i])->wire_number == i + 1);
        CHECK(sample_format_of_wire_code(static_cast<std::uint8_t>(i + 1))->name == names[i]);
    }
    CHECK_FALSE(sample_format("q8"));
    CHECK_FALSE(sample_format_of_wire_code(0));
    CHECK_FALSE(sample_format_of_wire_code(12));
    CHECK(format_named("i16").word_bytes() == 2);
    CHECK(format_named("f32").word_bytes() == 4);
}

TEST_CASE("sample format: what a code is worth, and where the range ends", "[stimuli]") {
    const auto q15 = format_named("q15"), q31 = format_named("q31"), i16 = format_named("i16");
    const auto i32 = format_named("i32"), f32 = format_named("f32");
    CHECK(lsb_value(q15) == 0x1p-15);
    CHECK(lsb_value(q31) == 0x1p-31);
    CHECK(lsb_value(i16) == 1.0);
    CHECK(full_scale_value(q15) == 1.0);
    CHECK(full_scale_value(i16) == 32768.0);
    CHECK(full_scale_value(i32) == 2147483648.0);
    CHECK(full_scale_value(f32) == 1.0);
    CHECK(highest_value(q15) == 1.0 - 0x1p-15);
    CHECK(lowest_value(q31) == -1.0);
    CHECK(highest_value(q31) == 1.0 - 0x1p-31);
    CHECK(lowest_value(i32) == -2147483648.0);
    CHECK(highest_value(i32) == 2147483647.0);
    CHECK(highest_value(f32) == static_cast<double>(std::numeric_limits<float>::max()));
    CHECK(lowest_value(f32) == -highest_value(f32));
    CHECK(value_of(q15, -32768) == -1.0);
    CHECK(value_of(i16, 1234) == 1234.0);
    const auto u12 = format_named("u12"), i24 = format_named("i24"), q7 = format_named("q7");
    CHECK(full_scale_value(u12) == 2048.0);
    CHECK(lowest_value(u12) == -2048.0);
    CHECK(highest_value(u12) == 2047.0);
    CHECK(lsb_value(u12) == 1.0);
    CHECK(zero_code(u12) == 2048);
    CHECK(value_of(u12, 0) == -2048.0);
    CHECK(value_of(u12, 2048) == 0.0);
    CHECK(value_of(u12, 4095) == 2047.0);
    CHECK(value_of(u12, 8191) == 6143.0);  // no u12, and its value says so
    CHECK(code_of(u12, 0.0, Rounding::half_up) == 2048);
    CHECK(code_of(u12, -0.5, Rounding::floor) == 2047);
    CHECK(code_of(u12, -0.5, Rounding::half_up) == 2048);
    CHECK(highest_value(i24) == 8388607.0);
    CHECK(highest_value(q7) == 1.0 - 0x1p-7);
    CHECK(zero_code(i24) == 0);
    CHECK(zero_code(f32) == 0);
    CHECK(value_of(f32, std::bit_cast<Code>(0.1F)) == static_cast<double>(0.1F));
}

TEST_CASE("sample format: every short code comes back from its value in every rounding", "[stimuli]") {
    for (const auto name : {"q7", "q15", "i8", "i16", "u8", "u12", "u16"}) {
        const auto format = format_named(name);
        const Code codes = Code{1} << format.word_bits;
        const Code lowest = format.family == FormatFamily::u ? 0 : -codes / 2;
        int lost = 0;
        for (const auto rounding_name : rounding_names()) {
            for (Code code = lowest; code < lowest + codes; ++code) {
                if (code_of(format, value_of(format, code), *rounding_from(rounding_name)) != code) ++lost;
            }
        }
        CHECK(lost == 0);
    }
}

TEST_CASE("sample format: a value half an LSB above a code goes where the rounding says", "[stimuli]") {
    const auto q31 = format_named("q31");
    const double tie = (1000.0 + 0.5) * 0x1p-31;
    CHECK(code_of(q31, tie, Rounding::floor) == 1000);
    CHECK(code_of(q31, tie, Rounding::half_up) == 1001);
    CHECK(code_of(q31, tie, Rounding::half_even) == 1000);
    CHECK(code_of(q31, -tie, Rounding::floor) == -1001);
    CHECK(code_of(q31, -tie, Rounding::toward_zero) == -1000);
    CHECK(code_of(q31, -tie, Rounding::half_away) == -1001);
}

TEST_CASE("sample format: values beyond the ends saturate, and the ends themselves do not move", "[stimuli]") {
    for (const auto name : {"q7", "q15", "q31", "i8", "i16", "i24", "i32", "u8", "u12", "u16"}) {
        INFO(name);
        const auto format = format_named(name);
        const auto size = static_cast<Code>((std::int64_t{1} << (format.word_bits - 1)) - 1);
        const Code top = size + zero_code(format);
        const Code bottom = format.family == FormatFamily::u ? 0 : -size - 1;
        for (const auto rounding_name : rounding_names()) {
            const Rounding rounding = *rounding_from(rounding_name);
            CHECK(code_of(format, full_scale_value(format), rounding) == top);
            CHECK(code_of(format, -full_scale_value(format), rounding) == bottom);
            CHECK(code_of(format, highest_value(format), rounding) == top);
            CHECK(code_of(format, highest_value(format) - lsb_value(format), rounding) == top - 1);
            CHECK(code_of(format, lowest_value(format) - lsb_value(format), rounding) == bottom);
            CHECK(code_of(format, lowest_value(format) + lsb_value(format), rounding) == bottom + 1);
            CHECK(code_of(format, 1e300, rounding) == top);
            CHECK(code_of(format, -1e300, rounding) == bottom);
            CHECK(code_of(format, infinity, rounding) == top);
            CHECK(code_of(format, -infinity, rounding) == bottom);
        }
        CHECK(code_of(format, highest_value(format) + 0.75 * lsb_value(format), Rounding::floor) == top);
        CHECK(code_of(format, lowest_value(format) - 0.75 * lsb_value(format), Rounding::toward_zero) == bottom);
    }
}

TEST_CASE("sample format: f32 rounds to the nearest float and saturates at the largest", "[stimuli]") {
    const auto f32 = format_named("f32");
    CHECK(code_of(f32, 0.1, Rounding::floor) == std::bit_cast<Code>(0.1F));
    CHECK(code_of(f32, 1.0 + 0x1p-24, Rounding::half_up) == std::bit_cast<Code>(1.0F));  // a tie, to even
    CHECK(code_of(f32, 1.0 + 0x1.8p-23, Rounding::floor) == std::bit_cast<Code>(1.0F + 0x1p-22F));
    CHECK(code_of(f32, 1e300, Rounding::floor) == std::bit_cast<Code>(std::numeric_limits<float>::max()));
    CHECK(code_of(f32, -infinity, Rounding::floor) == std::bit_cast<Code>(std::numeric_limits<float>::lowest()));
    CHECK(code_of(f32, -0.0, Rounding::floor) == std::bit_cast<Code>(-0.0F));
    CHECK(code_of(f32, 0x1p-149, Rounding::floor) == 1);
}

TEST_CASE("sample format: codes travel as little-endian words and come back", "[stimuli]") {
    const std::array<Code, 4> codes16 = {0x1234, -1, -32768, 32767};
    std::array<std::byte, 8> bytes16{};
    to_wire_bytes(format_named("q15"), codes16, bytes16);
    const std::array<unsigned, 8> expected = {0x34, 0x12, 0xff, 0xff, 0x00, 0x80, 0xff, 0x7f};
    for (std::size_t i = 0; i < 8; ++i) CHECK(std::to_integer<unsigned>(bytes16[i]) == expected[i]);
    std::array<Code, 4> back{};
    from_wire_bytes(format_named("q15"), bytes16, back);
    CHECK(back == codes16);

    const std::array<Code, 3> codes32 = {0x12345678, std::numeric_limits<Code>::min(), -2};
    std::array<std::byte, 12> bytes32{};
    to_wire_bytes(format_named("i32"), codes32, bytes32);
    CHECK(std::to_integer<unsigned>(bytes32[0]) == 0x78);
    CHECK(std::to_integer<unsigned>(bytes32[3]) == 0x12);
    std::array<Code, 3> back32{};
    from_wire_bytes(format_named("i32"), bytes32, back32);
    CHECK(back32 == codes32);
}

TEST_CASE("sample format: values of a block equal the values one by one", "[stimuli]") {
    for (const SampleFormat& each : sample_formats()) {
        const std::string name(each.name);
        const std::array<Code, 4> codes = {0, 1, 32767, 0x3f123456};
        std::array<double, 4> values{};
        values_of(format_named(name), codes, values);
        for (std::size_t i = 0; i < codes.size(); ++i) CHECK(values[i] == value_of(format_named(name), codes[i]));
    }
    values_of(format_named("q15"), {}, {});  // an empty block is a block
}
