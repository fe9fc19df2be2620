#include "rigs/virtual-board/paced_line.hpp"

#include <catch2/catch.hpp>
#include <limits>

using halflsb::board::Nanoseconds;
using halflsb::board::PacedLine;

TEST_CASE("paced line: bytes are due one by one, ten bits each", "[rigs]") {
    PacedLine line(1'000'000);  // 10 us a byte
    line.idle(1'000'000);
    CHECK(line.due(1'000'000) == 0);
    CHECK(line.due(1'009'999) == 0);
    CHECK(line.due(1'010'000) == 1);
    CHECK(line.due(1'999'999) == 99);
    line.passed(99);
    CHECK(line.due(2'000'000) == 1);
    CHECK(line.due(line.time_of(5)) == 6 - 1);
}

TEST_CASE("paced line: late wake-ups do not add up", "[rigs]") {
    // 115200 baud: 86.805 us a byte does not fit whole microseconds. An hour in steps of 0.7 ms, everything taken.
    PacedLine line(115200);
    line.idle(1);
    Nanoseconds now = 1;
    constexpr Nanoseconds hour = 3'600'000'000'000;
    while (now < hour) {
        now += 700'000;
        line.passed(line.due(now));
    }
    CHECK(line.bytes() == static_cast<std::uint64_t>((now - 1) / 1000 * 11520 / 1'000'000));
    CHECK(line.idle_ns() == 0);
}

TEST_CASE("paced line: idle time is counted from the last byte to the next", "[rigs]") {
    PacedLine line(1'000'000);
    line.idle(5'000'000);
    line.passed(100);  // until 6 ms
    line.idle(5'500'000);
    CHECK(line.idle_ns() == 0);
    line.idle(8'000'000);
    CHECK(line.idle_ns() >= 1'999'999);  // time_of rounds up by one
    CHECK(line.idle_ns() <= 2'000'000);
    CHECK(line.due(8'000'000) == 0);
}

TEST_CASE("paced line: a long sleep does not overflow", "[rigs]") {
    PacedLine line(100'000'000);
    line.idle(1);
    constexpr Nanoseconds month = Nanoseconds{30} * 86400 * 1'000'000'000;
    CHECK(line.due(month) >= 25'919'999'999'000u);
}

TEST_CASE("paced line: without a baud rate everything is due at once", "[rigs]") {
    PacedLine line(0);
    CHECK(line.due(0) == std::numeric_limits<std::size_t>::max());
    line.passed(1000);
    CHECK(line.bytes() == 1000);
}
