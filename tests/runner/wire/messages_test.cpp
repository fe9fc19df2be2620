// Message bodies against the byte layout of docs/wire.md, and against their own inverse.
#include "runner/wire/messages.hpp"

#include <catch2/catch.hpp>
#include <sstream>

using namespace halflsb;
using namespace halflsb::message;

namespace {

Bytes hex(const std::string& text) {
    Bytes bytes;
    std::istringstream words(text);
    for (std::string word; words >> word;) bytes.push_back(static_cast<std::byte>(std::stoi(word, nullptr, 16)));
    return bytes;
}

template <class Message>
Bytes encoded(const Message& message) {
    Bytes body;
    encode(message, body);
    return body;
}

/// The layout, its inverse, and that neither a shorter nor a longer body is taken.
template <class Message>
void check_layout(const Message& message, const std::string& layout, bool is_open_ended = false) {
    const Bytes body = hex(layout);
    CHECK(encoded(message) == body);
    const auto decoded = decode<Message>(body);
    REQUIRE(decoded.has_value());
    CHECK(encoded(*decoded) == body);
    if (is_open_ended) return;
    for (std::size_t size = 0; size < body.size(); ++size)
        CHECK_FALSE(decode<Message>(BytesView(body).first(size)).has_value());
    Bytes longer = body;
    longer.push_back(std::byte{0});
    CHECK_FALSE(decode<Message>(longer).has_value());
}

}  // namespace

TEST_CASE("messages: layout of the questions outside the stream", "[wire]") {
    check_layout(Hello{0x04030201, 5}, "01 02 03 04 05");
    check_layout(Start{0x04030201, 2, 256, 0x80000001}, "01 02 03 04 02 00 01 01 00 00 80");
    check_layout(Status{0xFFEEDDCC}, "CC DD EE FF");
    check_layout(Echo{1, hex("00 FF 0A")}, "01 00 00 00 00 FF 0A", true);
    CHECK(decode<Echo>(hex("01 00 00 00"))->bytes.empty());
    CHECK_FALSE(decode<Echo>(Bytes(4 + largest_echo_bytes + 1)).has_value());
    CHECK(decode<Echo>(Bytes(4 + largest_echo_bytes)).has_value());
}

TEST_CASE("messages: layout of the stream", "[wire]") {
    const Bytes words = hex("34 12 CD AB");
    check_layout(Samples{0x0102, words}, "02 01 34 12 CD AB", true);
    check_layout(Reset{7, 0x0102030405060708}, "07 00 08 07 06 05 04 03 02 01");
    check_layout(Set{7, 1, 3, -2}, "07 00 01 00 00 00 00 00 00 00 03 FE FF FF FF");
    check_layout(Load{7, 1, 3, 0x0201, {-1, 0x7FFFFFFF}},
                 "07 00 01 00 00 00 00 00 00 00 03 01 02 FF FF FF FF FF FF FF 7F", true);
    check_layout(Select{7, 1, 9}, "07 00 01 00 00 00 00 00 00 00 09");
    check_layout(Response{0xFFFE, 0x04030201, 0xFFFFFE, words}, "FE FF 01 02 03 04 FE FF FF 34 12 CD AB", true);
    check_layout(Done{7, 1}, "07 00 01 00 00 00 00 00 00 00");
    check_layout(Expect{0x8001}, "01 80");
    check_layout(Refused{0x10, 0x8001, 2}, "10 01 80 02");
}

TEST_CASE("messages: LOAD carries 1 to 8 whole values", "[wire]") {
    Load load{1, 2, 3, 4, {}};
    CHECK_FALSE(decode<Load>(encoded(load)).has_value());
    load.values.assign(8, 5);
    CHECK(decode<Load>(encoded(load))->values.size() == 8);
    load.values.assign(9, 5);
    CHECK_FALSE(decode<Load>(encoded(load)).has_value());
    load.values.assign(2, 5);
    Bytes cut = encoded(load);
    cut.pop_back();
    CHECK_FALSE(decode<Load>(cut).has_value());
}

TEST_CASE("messages: layout of the greeting", "[wire]") {
    const Bytes rest = hex("AA BB");
    check_layout(GreetingPage{0x04030201, 1, 3, rest}, "01 02 03 04 01 03 AA BB", true);
    BoardPage board;
    board.protocol = 1;
    board.build_id = hex("DE AD");
    board.serial = "CW7";
    board.filters = 2;
    board.settings = 1;
    board.max_block_samples = 256;
    board.credit_blocks = 4;
    board.tick_hz = 1000000;
    board.tick_bits = 32;
    check_layout(board, "01 02 DE AD 03 43 57 37 02 01 00 01 04 40 42 0F 00 20");
    FilterPage filter;
    filter.name = "ma";
    filter.injection = 1;
    filter.input = 2;
    filter.output = 3;
    filter.channels_in = 4;
    filter.channels_out = 5;
    filter.nodes = 6;
    filter.tables = 7;
    check_layout(filter, "02 6D 61 01 02 03 04 05 06 07");
    const auto written_out = decode<FilterPage>(hex("02 6D 61 01 02 03 04 05 06 07 01 00 01 00"));
    REQUIRE(written_out);
    CHECK(written_out->tables == filter.tables);
    CHECK(written_out->up == 1);
    CHECK(written_out->down == 1);
    filter.up = 3;
    filter.down = 2;
    CHECK(encoded(filter) == hex("02 6D 61 01 02 03 04 05 06 07 03 00 02 00"));
    check_layout(SettingPage{"g", -1, 2, 0}, "01 67 FF FF FF FF 02 00 00 00 00 00 00 00");
    check_layout(Started{0x04030201, 256, 64}, "01 02 03 04 00 01 40");
    check_layout(Counters{1, 2, 3, 4, 5, 6}, "01 00 00 00 02 00 00 00 03 00 00 00 04 00 00 00 05 00 00 00 06 00 00 00");
}

TEST_CASE("messages: texts and ids longer than docs/wire.md allows are not taken", "[wire]") {
    FilterPage filter;
    filter.name = std::string(24, 'x');
    CHECK(decode<FilterPage>(encoded(filter)).has_value());
    filter.name += 'x';
    CHECK_FALSE(decode<FilterPage>(encoded(filter)).has_value());
    BoardPage board;
    board.build_id.assign(32, std::byte{1});
    CHECK(decode<BoardPage>(encoded(board)).has_value());
    board.build_id.assign(33, std::byte{1});
    CHECK_FALSE(decode<BoardPage>(encoded(board)).has_value());
    // Everything full: 69 bytes of page, 6 before it, 1 of type and 4 of CRC.
    board.build_id.assign(32, std::byte{1});
    board.serial = std::string(24, 'x');
    Bytes page = encoded(GreetingPage{1, 0, 1, encoded(board)});
    CHECK(page.size() + 5 == largest_page_content_bytes);
}

TEST_CASE("messages: names and reasons in words", "[wire]") {
    CHECK(name_of(0x81) == "GREETING");
    CHECK(name_of(0x33) == "type 0x33");
    CHECK(reason_text(3) == "not the current sample index");
    CHECK(reason_text(77) == "reason 77, which this version does not know");
}
