#include <catch2/catch.hpp>
#include <string>

#include "tests/kit/bench.hpp"

using namespace kit_bench;

namespace {

Bytes text(const std::string& characters) {
    return u8(static_cast<unsigned>(characters.size())) + Bytes(characters.begin(), characters.end());
}

/// The page's own fields.
Bytes page_of(unsigned number) {
    const std::uint32_t nonce = 0x12340000u + number;
    const Bytes greeting = ask_one(u8(0x01) + u32(nonce) + u8(number), 0x81);
    CHECK(get32(greeting, 1) == nonce);
    CHECK(greeting.at(5) == number);
    CHECK(greeting.at(6) == 1 + filter_count + board().setting_count);
    CHECK(greeting.size() + 4 <= 80);
    return Bytes(greeting.begin() + 7, greeting.end());
}

}  // namespace

TEST_CASE("greeting: page 0 says what the board is", "[kit]") {
    power_up();
    Bytes build_id(board().build_id, board().build_id + 20);
    CHECK(page_of(0) == u8(1) + u8(20) + build_id + text("CW-7-0042") + u8(filter_count) + u8(1) +
                            u16(HALFLSB_BLOCK_SAMPLES) + u8(HALFLSB_CREDIT_BLOCKS) + u32(1'000'000) + u8(24));
}

TEST_CASE("greeting: without build-id, serial, settings and counter these are empty", "[kit]") {
    power_up();
    board().build_id = nullptr;
    board().serial = "";
    board().setting_count = 0;
    board().tick_bits = 0;
    CHECK(page_of(0) == u8(1) + u8(0) + u8(0) + u8(filter_count) + u8(0) + u16(HALFLSB_BLOCK_SAMPLES) +
                            u8(HALFLSB_CREDIT_BLOCKS) + u32(0) + u8(0));
}

TEST_CASE("greeting: the longest texts still fit a page", "[kit]") {
    power_up();
    const Bytes long_id(255, 0);
    board().build_id = long_id.data();
    board().build_id_bytes = 255;
    board().serial = "0123456789012345678901234567890123456789";
    const Bytes page = page_of(0);
    CHECK(page.size() == 69);
    CHECK(Bytes(page.begin() + 34, page.begin() + 59) == text("012345678901234567890123"));
}

TEST_CASE("greeting: a board may claim less than was compiled in, never more", "[kit]") {
    power_up();
    board().block_samples = 1;
    board().credit_blocks = 1;
    Bytes page = page_of(0);
    CHECK(get16(page, 34) == 1);
    CHECK(page[36] == 1);
    board().block_samples = HALFLSB_BLOCK_SAMPLES + 1;
    board().credit_blocks = HALFLSB_CREDIT_BLOCKS + 1;
    page = page_of(0);
    CHECK(get16(page, 34) == HALFLSB_BLOCK_SAMPLES);
    CHECK(page[36] == HALFLSB_CREDIT_BLOCKS);
}

TEST_CASE("greeting: a page for each filter, then one for each setting", "[kit]") {
    power_up();
    CHECK(page_of(1) == text("double") + Bytes{0, 1, 1, 1, 1, 0, 0});
    CHECK(page_of(2) == text("sum") + Bytes{1, 3, 4, 1, 1, 0, 0});
    CHECK(page_of(3) == text("narrow") + Bytes{2, 2, 1, 1, 1, 0, 0});
    CHECK(page_of(4) == text("two") + Bytes{0, 1, 1, 2, 2, 0, 0});
    CHECK(page_of(5) == text("table") + Bytes{0, 1, 1, 1, 1, 0, 1});
    CHECK(page_of(6) == text("other double, 24 bytes..") + Bytes{0, 1, 1, 1, 1, 0, 0});
    log().gain = -3;
    CHECK(page_of(7) ==
          text("gain") + u32(static_cast<std::uint32_t>(-5)) + u32(1000) + u32(static_cast<std::uint32_t>(-3)));
    CHECK(ask(u8(0x01) + u32(77) + u8(8)) == std::vector<Bytes>{refused(0x01, 77, 5)});
}

TEST_CASE("greeting: HELLO may be repeated and disturbs no stream", "[kit]") {
    power_up();
    start(double_filter, 1);
    CHECK(words_of(ask_one(samples_content(0, {5}), 0x90)) == std::vector<std::int16_t>{10});
    CHECK(page_of(0) == page_of(0));
    CHECK(words_of(ask_one(samples_content(1, {6}), 0x90)) == std::vector<std::int16_t>{12});
}

TEST_CASE("echo: 0 to 32 bytes of any value come back", "[kit]") {
    power_up();
    for (unsigned length = 0; length <= 32; ++length) {
        for (unsigned first = 0; first < 256; first += 31) {
            Bytes data(length);
            for (std::size_t i = 0; i < length; ++i) data[i] = static_cast<std::uint8_t>(first + i);
            CHECK(ask_one(u8(0x04) + u32(0x00FF0000u + length) + data, 0x84) ==
                  u8(0x84) + u32(0x00FF0000u + length) + data);
        }
    }
    CHECK(ask(u8(0x04) + u32(9) + Bytes(33, 1)) == std::vector<Bytes>{refused(0x04, 9, 5)});
}

TEST_CASE("outside the stream: wrong lengths and unknown types are refused, answers of our own are not answered",
          "[kit]") {
    power_up();
    CHECK(ask(u8(0x01) + u32(1)) == std::vector<Bytes>{refused(0x01, 1, 5)});
    CHECK(ask(u8(0x02) + u32(2) + u8(0)) == std::vector<Bytes>{refused(0x02, 2, 5)});
    CHECK(ask(u8(0x03) + u32(3) + u8(0)) == std::vector<Bytes>{refused(0x03, 3, 5)});
    CHECK(ask(u8(0x04)) == std::vector<Bytes>{refused(0x04, 0, 5)});
    CHECK(ask(u8(0x05) + u32(0x12345678)) == std::vector<Bytes>{refused(0x05, 0x5678, 1)});
    for (unsigned type : {0x00u, 0x0Fu, 0x15u, 0x20u, 0x2Fu, 0x7Fu}) {
        CHECK(ask(u8(type)) == std::vector<Bytes>{refused(type, 0, 1)});
    }
    for (unsigned type = 0x80; type <= 0xFF; ++type) CHECK(ask(u8(type) + u32(1)).empty());
}

TEST_CASE("greeting: an answer begins with a delimiter, which ends what a boot message left on the line", "[kit]") {
    power_up();
    put(frame_of(u8(0x03) + u32(5)));
    const Bytes sent = take_bytes();
    REQUIRE(sent.size() > 2);
    CHECK(sent.front() == 0);
    CHECK(sent.back() == 0);
}
