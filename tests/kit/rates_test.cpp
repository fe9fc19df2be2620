// Filters that return fewer instants than they take, or more: the greeting's tail, the blocks granted, and that no
// input is overwritten before its turn.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cstring>

#include "rigs/kit/layout.h"
#include "tests/kit/bench.hpp"

#if HALFLSB_RATES

using namespace kit_bench;

namespace {

// Bytes are passed on as they are, so that the order of a machine's words does not matter. Each input is followed by
// rise - 1 copies with the number of the copy added to the first byte; of these each fall-th is returned, from number
// `phase` on.
struct Rate {
    unsigned up, down;  // the cycle that is greeted
    unsigned rise, fall, phase;
};
Rate rate{};
halflsb_filter filter{};
unsigned in_bytes = 0;
unsigned first_byte = 0;  // where the first byte in memory travels within its word
unsigned place = 0;
unsigned calls = 0;

void reset() { place = 0; }
std::uint16_t process(const void* in, void* out, std::uint16_t count) {
    const auto* from = static_cast<const std::uint8_t*>(in);
    auto* to = static_cast<std::uint8_t*>(out);
    std::uint16_t written = 0;
    ++calls;
    for (unsigned n = 0; n < count; ++n) {
        std::uint8_t instant[8];
        std::memcpy(instant, from, in_bytes);
        from += in_bytes;
        for (unsigned copy = 0; copy < rate.rise; ++copy, ++place) {
            if (place % rate.fall != rate.phase) continue;
            std::memcpy(to, instant, in_bytes);
            to[0] = static_cast<std::uint8_t>(to[0] + copy);
            to += in_bytes;
            ++written;
        }
    }
    return written;
}
std::uint16_t process_otherwise(const void*, void*, std::uint16_t) { return 0; }
void process_never(const void*, void*, std::uint16_t) { FAIL("process of a filter that has process_rate"); }

/// What should come back, computed outside.
Bytes expected(const Bytes& sent, unsigned first_input) {
    Bytes out;
    for (std::size_t n = 0; n < sent.size() / in_bytes; ++n) {
        for (unsigned copy = 0; copy < rate.rise; ++copy) {
            if (((first_input + n) * rate.rise + copy) % rate.fall != rate.phase) continue;
            Bytes instant(sent.begin() + static_cast<std::ptrdiff_t>(n * in_bytes),
                          sent.begin() + static_cast<std::ptrdiff_t>((n + 1) * in_bytes));
            instant[first_byte] = static_cast<std::uint8_t>(instant[first_byte] + copy);
            out = out + instant;
        }
    }
    return out;
}

void use(const Rate& chosen, unsigned format, unsigned channels) {
    rate = chosen;
    place = 0;
    const unsigned word = format == HALFLSB_Q31 ? 4 : format == HALFLSB_Q15 ? 2 : 1;
    in_bytes = word * channels;
    first_byte = is_swapped ? word - 1 : 0;
    const auto count = static_cast<std::uint8_t>(channels);
    filter = {"rate",
              HALFLSB_CALL,
              static_cast<std::uint8_t>(format),
              static_cast<std::uint8_t>(format),
              count,
              count,
              0,
              reset,
              process_never,
              nullptr,
              static_cast<std::uint16_t>(chosen.up),
              static_cast<std::uint16_t>(chosen.down),
              process};
    power_up();
    board().filters = &filter;
    board().filter_count = 1;
    start_again();
}

Bytes sent_bytes(std::size_t count, unsigned seed) {
    Bytes bytes;
    for (std::size_t i = 0; i < count; ++i) bytes.push_back(static_cast<std::uint8_t>(i * 37 + seed * 11 + 5));
    return bytes;
}
Bytes answer_of(const Bytes& response) { return {response.begin() + 10, response.end()}; }

const Rate rates[] = {
    {1, 3, 1, 3, 0}, {1, 3, 1, 3, 2}, {4, 1, 4, 1, 0},   {3, 2, 3, 2, 0},
    {3, 2, 3, 2, 1}, {2, 3, 2, 3, 0}, {1, 40, 1, 40, 7},
};

}  // namespace

TEST_CASE("rates: the greeting's tail says the cycle, and only of a filter that has one", "[kit]") {
    use({3, 2, 3, 2, 0}, HALFLSB_Q15, 1);
    const Bytes with = ask_one(u8(0x01) + u32(7) + u8(1), 0x81);
    CHECK(Bytes(with.end() - 5, with.end()) == u8(0) + u16(3) + u16(2));
    use({0, 3, 1, 3, 0}, HALFLSB_Q15, 1);
    const Bytes zero = ask_one(u8(0x01) + u32(7) + u8(1), 0x81);
    CHECK(Bytes(zero.end() - 4, zero.end()) == u16(1) + u16(3));
    power_up();
    const Bytes without = ask_one(u8(0x01) + u32(7) + u8(1), 0x81);
    CHECK(without.size() == 7 + 1 + 6 + 7);
}

TEST_CASE("rates: every block of every length comes back as the chain says, whatever lies behind it", "[kit]") {
    for (const Rate& chosen : rates) {
        for (const auto& [format, channels] : {std::pair{1u, 1u}, {2u, 1u}, {7u, 1u}, {1u, 2u}}) {
            use(chosen, format, channels);
            const unsigned most_out = chosen.up * in_bytes;
            if (most_out > HALFLSB_BLOCK_BYTES) {
                CHECK(ask(start_content(99, 0, 1)) == std::vector<Bytes>{refused(0x02, 99, 6)});
                continue;
            }
            const unsigned block = start(0, HALFLSB_BLOCK_SAMPLES).block;
            REQUIRE(block >= 1);
            unsigned seq = 0, index = 0;
            for (unsigned length = 1; length <= block; ++length) {
                const Bytes sent = sent_bytes(length * in_bytes, seq);
                const Bytes response = ask_one(u8(0x10) + u16(seq) + sent, 0x90);
                INFO("up " << chosen.up << " down " << chosen.down << " bytes " << in_bytes << " length " << length);
                REQUIRE(answer_of(response) == expected(sent, index));
                index += length;
                ++seq;
            }
            CHECK(ask(u8(0x10) + u16(seq) + sent_bytes((block + 1) * in_bytes, 0)) ==
                  std::vector<Bytes>{refused(0x10, seq, 5)});
        }
    }
}

TEST_CASE("rates: a block is granted as far as its answers fit", "[kit]") {
    use({1, 4, 1, 4, 0}, HALFLSB_Q15, 1);
    CHECK(start(0, HALFLSB_BLOCK_SAMPLES).block == HALFLSB_BLOCK_SAMPLES);
    if (HALFLSB_BLOCK_BYTES < 8) return;
    use({4, 1, 4, 1, 0}, HALFLSB_Q15, 1);
    CHECK(start(0, HALFLSB_BLOCK_SAMPLES).block ==
          static_cast<unsigned>(std::min(HALFLSB_BLOCK_BYTES / 8, HALFLSB_BLOCK_SAMPLES)));
}

TEST_CASE("rates: an answer without an instant is sent again as any other", "[kit]") {
    use({1, 3, 1, 3, 2}, HALFLSB_Q15, 1);
    start(0, HALFLSB_BLOCK_SAMPLES);
    const Bytes first = u8(0x10) + u16(0) + u16(0x1234);
    const Bytes empty = ask_one(first, 0x90);
    CHECK(empty.size() == 10);
    const unsigned before = calls;
    CHECK(ask_one(first, 0x90) == empty);
    CHECK(calls == before);
    CHECK(ask_one(u8(0x10) + u16(1) + u16(0x2345), 0x90).size() == 10);
    CHECK(answer_of(ask_one(u8(0x10) + u16(2) + u16(0x3456), 0x90)) == u16(0x3456));
    CHECK(ask_one(u8(0x11) + u16(3) + u64(3), 0x91) == u8(0x91) + u16(3) + u64(3));
    CHECK(ask_one(u8(0x10) + u16(4) + u16(0x4567), 0x90).size() == 10);
}

TEST_CASE("rates: SELECT takes no filter of another rate", "[kit]") {
    use({1, 3, 1, 3, 0}, HALFLSB_Q15, 1);
    halflsb_filter both[] = {filter, filter, filter, filter};
    both[1].down = 2;
    both[2].process_rate = nullptr;
    both[3].process_rate = process_otherwise;
    board().filters = both;
    board().filter_count = 4;
    start_again();
    start(0, 1);
    CHECK(ask(u8(0x14) + u16(0) + u64(0) + u8(1)) == std::vector<Bytes>{refused(0x14, 0, 5)});
    CHECK(ask(u8(0x14) + u16(1) + u64(0) + u8(2)) == std::vector<Bytes>{refused(0x14, 1, 5)});
    CHECK(ask_one(u8(0x14) + u16(2) + u64(0) + u8(3), 0x91) == u8(0x91) + u16(2) + u64(0));
    CHECK(ask_one(u8(0x10) + u16(3) + u16(1), 0x90).size() == 10);
}

#endif
