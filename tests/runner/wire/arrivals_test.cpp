#include "runner/wire/arrivals.hpp"

#include <catch2/catch.hpp>

using namespace halflsb;

namespace {

Arrivals after(const std::string& bytes) {
    Arrivals arrivals;
    arrivals.add_bytes(std::as_bytes(std::span(bytes.data(), bytes.size())));
    return arrivals;
}

}  // namespace

TEST_CASE("arrivals: counts and times in words", "[wire]") {
    CHECK(with_thousands(0) == "0");
    CHECK(with_thousands(999) == "999");
    CHECK(with_thousands(1000) == "1,000");
    CHECK(with_thousands(1234567) == "1,234,567");
    CHECK(in_seconds(seconds(0.0)) == "0.0 s");
    CHECK(in_seconds(std::chrono::milliseconds(1949)) == "1.9 s");
    CHECK(in_seconds(std::chrono::milliseconds(1950)) == "2.0 s");
    CHECK(in_seconds(seconds(61.5)) == "61.5 s");
}

TEST_CASE("arrivals: what came is told as it looked", "[wire]") {
    CHECK(Arrivals().text() == "nothing came");
    CHECK(after("O").text() == "1 byte came and no whole frame, the last: \"O\"");
    CHECK(after("a\t\"b\\\r\n").text() == "7 bytes came and no whole frame, the last: \"a\\t\\\"b\\\\\\r\\n\"");
    CHECK(after("OK\x01").text() == "3 bytes came and no whole frame, the last: 4f 4b 01");
    CHECK(after("\x7F").text() == "1 byte came and no whole frame, the last: 7f");
    CHECK(after(std::string(24, 'x')).text() ==
          "24 bytes came and no whole frame, the last: \"xxxxxxxxxxxxxxxxxxxxxxxx\"");
    CHECK(after(std::string(1200, '\0') + std::string(24, 'y')).text() ==
          "1,224 bytes came and no whole frame, the last: … \"yyyyyyyyyyyyyyyyyyyyyyyy\"");

    Arrivals frames = after("........");
    frames.add_frame(0x92);
    CHECK(frames.text() == "8 bytes came with 1 good frame, the last EXPECT");
    frames.add_frame(0x90);
    CHECK(frames.text() == "8 bytes came with 2 good frames, the last RESPONSE");
    frames.add_frame(0x01);
    CHECK(frames.text() == "8 bytes came, the same as was sent: it looks like an echo");
    frames.start_over();
    CHECK(frames.text() == "nothing came");
}
