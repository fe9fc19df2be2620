#include "rigs/virtual-board/sample_words.hpp"

#include <catch2/catch.hpp>
#include <vector>

#include "rigs/kit/halflsb_kit.h"

using namespace halflsb::board;

namespace {

using Bytes = std::vector<std::uint8_t>;

constexpr Format u12_left = HALFLSB_U12 | HALFLSB_LEFT, i24_left = HALFLSB_I24 | HALFLSB_LEFT;
constexpr Format i24_packed = HALFLSB_I24 | HALFLSB_PACKED, i24_packed_big = i24_packed | HALFLSB_BIG;
constexpr Format i16_big = HALFLSB_I16 | HALFLSB_BIG, u12_left_big = u12_left | HALFLSB_BIG;

Bytes bytes_of(Format format, std::int32_t code) {
    Bytes bytes(2 * word_bytes(format), 0xEE);
    put_code(bytes.data(), 1, format, code);  // the second word: the first must stay as it is
    CHECK(bytes[word_bytes(format) - 1] == 0xEE);
    return Bytes(bytes.begin() + static_cast<std::ptrdiff_t>(word_bytes(format)), bytes.end());
}

}  // namespace

TEST_CASE("sample words: where the bits of a code lie", "[rigs]") {
    CHECK(bytes_of(HALFLSB_Q7, -2) == Bytes{0xFE});
    CHECK(bytes_of(HALFLSB_U8, 200) == Bytes{200});
    CHECK(bytes_of(HALFLSB_Q15, -2) == Bytes{0xFE, 0xFF});
    CHECK(bytes_of(i16_big, -2) == Bytes{0xFF, 0xFE});
    CHECK(bytes_of(HALFLSB_U12, 0x123) == Bytes{0x23, 0x01});
    CHECK(bytes_of(u12_left, 0x123) == Bytes{0x30, 0x12});
    CHECK(bytes_of(u12_left_big, 0x123) == Bytes{0x12, 0x30});
    CHECK(bytes_of(HALFLSB_U16, 0xFEDC) == Bytes{0xDC, 0xFE});
    CHECK(bytes_of(HALFLSB_I24, -2) == Bytes{0xFE, 0xFF, 0xFF, 0xFF});
    CHECK(bytes_of(i24_left, -2) == Bytes{0x00, 0xFE, 0xFF, 0xFF});
    CHECK(bytes_of(i24_packed, 0x123456) == Bytes{0x56, 0x34, 0x12});
    CHECK(bytes_of(i24_packed_big, -2) == Bytes{0xFF, 0xFF, 0xFE});
    CHECK(bytes_of(HALFLSB_I32, 0x12345678) == Bytes{0x78, 0x56, 0x34, 0x12});
}

TEST_CASE("sample words: the ends, the middle and their neighbours survive every layout", "[rigs]") {
    for (const Format format : {Format{HALFLSB_Q7}, Format{HALFLSB_U8}, Format{HALFLSB_Q15}, i16_big,
                                Format{HALFLSB_U12}, u12_left, u12_left_big, Format{HALFLSB_U16}, Format{HALFLSB_I24},
                                i24_left, i24_packed, i24_packed_big, Format{HALFLSB_Q31}}) {
        INFO(text_of(format));
        const std::int64_t half = std::int64_t{1} << (value_bits(format) - 1), zero = zero_code(format);
        for (const std::int64_t value :
             {-half, -half + 1, std::int64_t{-1}, std::int64_t{0}, std::int64_t{1}, half - 1}) {
            const auto code = static_cast<std::int32_t>(zero + value);
            CHECK(code_at(bytes_of(format, code).data(), 0, format) == code);
            if ((format & HALFLSB_LEFT) == 0) {  // there, what comes to lie below is not read
                CHECK(bytes_swapped(format, bytes_swapped(format, code)) == code);
            }
            const auto opposite = static_cast<std::int32_t>(zero + (value == -half ? half - 1 : -value));
            CHECK(inverted(format, code) == opposite);
        }
    }
}

TEST_CASE("sample words: a right-justified word is read whole, a left-justified one from its top", "[rigs]") {
    const Bytes word = {0xBC, 0xFA};
    CHECK(code_at(word.data(), 0, HALFLSB_U12) == 0xFABC);
    CHECK(code_at(word.data(), 0, u12_left) == 0xFAB);
    CHECK(bytes_swapped(HALFLSB_U12, 0x123) == 0x2301);
    CHECK(bytes_swapped(i24_packed, 0x123456) == 0x563412);
    CHECK(has_spare_bits(HALFLSB_U12));
    CHECK(has_spare_bits(i24_left));
    CHECK_FALSE(has_spare_bits(i24_packed));
    CHECK_FALSE(has_spare_bits(HALFLSB_U16));
    CHECK(other_justification(HALFLSB_U12) == u12_left);
    CHECK(other_justification(u12_left) == HALFLSB_U12);
    CHECK(text_of(u12_left_big) == "u12, left-justified, big-endian");
    CHECK(text_of(i24_packed) == "i24, packed");
}
