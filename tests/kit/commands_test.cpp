#include <catch2/catch.hpp>

#include "tests/kit/bench.hpp"

using namespace kit_bench;

namespace {

Bytes command(unsigned type, unsigned seq, std::uint64_t at, const Bytes& fields = {}) {
    return u8(type) + u16(seq) + u64(at) + fields;
}

Bytes done(unsigned seq, std::uint64_t at) { return u8(0x91) + u16(seq) + u64(at); }

Bytes table_values(unsigned table, unsigned offset, const std::vector<std::int32_t>& values) {
    Bytes fields = u8(table) + u16(offset);
    for (std::int32_t value : values) fields = std::move(fields) + u32(static_cast<std::uint32_t>(value));
    return fields;
}

}  // namespace

TEST_CASE("commands: a reset takes effect between two samples, exactly once", "[kit]") {
    power_up();
    start(double_filter, 1);
    CHECK(log().resets[double_filter] == 1);
    CHECK(ask(command(0x11, 0, 0)) == std::vector<Bytes>{done(0, 0)});
    CHECK(log().resets[double_filter] == 2);
    ask_one(samples_content(1, {1}), 0x90);
    CHECK(ask(command(0x11, 2, 1)) == std::vector<Bytes>{done(2, 1)});
    CHECK(log().resets[double_filter] == 3);
    CHECK(ask(command(0x11, 2, 1)) == std::vector<Bytes>{done(2, 1)});  // the answer was lost
    CHECK(log().resets[double_filter] == 3);
}

TEST_CASE("commands: the index counts samples in 64 bits", "[kit]") {
    power_up();
    const unsigned block = HALFLSB_BLOCK_SAMPLES;
    start(double_filter, block);
    unsigned seq = 0;
    std::uint64_t index = 0;
    for (; index < 70000; index += block)
        ask_one(samples_content(seq++ % 65536, std::vector<std::int16_t>(block)), 0x90);
    CHECK(ask(command(0x11, seq % 65536, index)) == std::vector<Bytes>{done(seq % 65536, index)});
    ++seq;
    const std::uint64_t high = index + (std::uint64_t{1} << 32);
    CHECK(ask(command(0x11, seq % 65536, high)) == std::vector<Bytes>{refused(0x11, seq % 65536, 3)});
}

TEST_CASE("commands: an index that is not the current one is refused, reason 3", "[kit]") {
    power_up();
    start(double_filter, 1);
    ask_one(samples_content(0, {1}), 0x90);
    CHECK(ask(command(0x11, 1, 0)) == std::vector<Bytes>{refused(0x11, 1, 3)});
    CHECK(ask(command(0x12, 2, 2, u8(0) + u32(1))) == std::vector<Bytes>{refused(0x12, 2, 3)});
    CHECK(log().resets[double_filter] == 1);
    CHECK(ask(command(0x11, 3, 1)) == std::vector<Bytes>{done(3, 1)});
}

TEST_CASE("commands: SET changes a setting within its range", "[kit]") {
    power_up();
    start(double_filter, 1);
    unsigned seq = 0;
    for (std::int32_t value : {-5, 1000, 0}) {
        const unsigned number = seq++;
        CHECK(ask(command(0x12, number, 0, u8(0) + u32(static_cast<std::uint32_t>(value)))) ==
              std::vector<Bytes>{done(number, 0)});
        CHECK(log().gain == value);
    }
    CHECK(log().gain_changes == 3);
    for (std::int32_t value : {-6, 1001}) {
        const unsigned number = seq++;
        CHECK(ask(command(0x12, number, 0, u8(0) + u32(static_cast<std::uint32_t>(value)))) ==
              std::vector<Bytes>{refused(0x12, number, 5)});
    }
    CHECK(ask(command(0x12, seq, 0, u8(1) + u32(0))) == std::vector<Bytes>{refused(0x12, seq, 4)});
    ++seq;
    CHECK(ask(command(0x12, seq, 0, u8(0) + u16(0))) == std::vector<Bytes>{refused(0x12, seq, 5)});
    CHECK(log().gain == 0);
}

TEST_CASE("commands: LOAD writes 1 to 8 words of a table", "[kit]") {
    power_up();
    start(table_filter, 1);
    CHECK(ask(command(0x13, 0, 0, table_values(0, 0, {2, -3, 4, 5}))) == std::vector<Bytes>{done(0, 0)});
    CHECK(ask(command(0x13, 1, 0, table_values(0, 3, {-7}))) == std::vector<Bytes>{done(1, 0)});
    const int table[4] = {2, -3, 4, -7};
    for (unsigned n = 0; n < 4; ++n) {
        CHECK(words_of(ask_one(samples_content(2 + n, {100}), 0x90)) ==
              std::vector<std::int16_t>{static_cast<std::int16_t>(100 * table[n])});
    }
    CHECK(ask(command(0x13, 6, 4, table_values(0, 1, {1, 1, 1, 1}))) == std::vector<Bytes>{refused(0x13, 6, 5)});
    CHECK(ask(command(0x13, 7, 4, table_values(1, 0, {1}))) == std::vector<Bytes>{refused(0x13, 7, 4)});
    CHECK(ask(command(0x13, 8, 4, table_values(0, 0, {}))) == std::vector<Bytes>{refused(0x13, 8, 5)});
    CHECK(ask(command(0x13, 9, 4, table_values(0, 0, std::vector<std::int32_t>(8)))) ==
          std::vector<Bytes>{refused(0x13, 9, 5)});  // eight are allowed on the wire, the table has four
    CHECK(ask(command(0x13, 10, 4, table_values(0, 0, std::vector<std::int32_t>(9)))) ==
          std::vector<Bytes>{refused(0x13, 10, 5)});
    CHECK(ask(command(0x13, 11, 4, table_values(0, 0, {1}) + u8(0))) == std::vector<Bytes>{refused(0x13, 11, 5)});
    start(double_filter, 1);
    CHECK(ask(command(0x13, 0, 0, table_values(0, 0, {1}))) == std::vector<Bytes>{refused(0x13, 0, 4)});
}

TEST_CASE("commands: SELECT changes to a filter of the same formats, from its reset", "[kit]") {
    power_up();
    start(double_filter, 1);
    CHECK(words_of(ask_one(samples_content(0, {7}), 0x90)) == std::vector<std::int16_t>{14});
    CHECK(ask(command(0x14, 1, 1, u8(other_filter))) == std::vector<Bytes>{done(1, 1)});
    CHECK(log().resets[other_filter] == 1);
    CHECK(words_of(ask_one(samples_content(2, {7}), 0x90)) == std::vector<std::int16_t>{15});
    CHECK(ask(command(0x14, 3, 2, u8(sum_filter))) == std::vector<Bytes>{refused(0x14, 3, 5)});
    CHECK(ask(command(0x14, 4, 2, u8(two_filter))) == std::vector<Bytes>{refused(0x14, 4, 5)});
    CHECK(ask(command(0x14, 5, 2, u8(filter_count))) == std::vector<Bytes>{refused(0x14, 5, 4)});
    CHECK(ask(command(0x14, 6, 2)) == std::vector<Bytes>{refused(0x14, 6, 5)});
    CHECK(words_of(ask_one(samples_content(7, {7}), 0x90)) == std::vector<std::int16_t>{15});
}

TEST_CASE("commands: wrong lengths are refused, reason 5", "[kit]") {
    power_up();
    start(double_filter, 1);
    CHECK(ask(u8(0x11) + u16(0) + u32(0)) == std::vector<Bytes>{refused(0x11, 0, 5)});
    CHECK(ask(command(0x11, 1, 0, u8(0))) == std::vector<Bytes>{refused(0x11, 1, 5)});
    CHECK(ask(u8(0x11) + u8(0)) == std::vector<Bytes>{refused(0x11, 0, 5)});  // no number at all: none is used
    CHECK(ask(command(0x11, 2, 0)) == std::vector<Bytes>{done(2, 0)});
}
