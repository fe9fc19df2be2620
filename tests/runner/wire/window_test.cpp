#include "runner/wire/window.hpp"

#include <catch2/catch.hpp>

using namespace halflsb;
using Place = StreamWindow::Place;

namespace {

void push(StreamWindow& window, int mark) {
    StreamWindow::Frame& frame = window.push();
    frame.at = mark;
    frame.bytes.assign(1, static_cast<std::byte>(mark));
}

int sent_mark(StreamWindow& window) {
    const auto bytes = window.take_unsent();
    return bytes ? std::to_integer<int>((*bytes)[0]) : -1;
}

}  // namespace

TEST_CASE("window: closed it holds nothing, open as much as there is credit", "[wire]") {
    StreamWindow window;
    CHECK_FALSE(window.is_open());
    CHECK_FALSE(window.has_room());
    CHECK(window.place_of(0) == Place::outside);
    CHECK_FALSE(window.may_be_expected(0));
    window.open(3);
    for (int k = 0; k < 3; ++k) {
        CHECK(window.has_room());
        push(window, k);
    }
    CHECK_FALSE(window.has_room());
    CHECK(window.in_flight() == 3);
    window.answer_oldest();
    CHECK(window.has_room());
    window.close();
    CHECK_FALSE(window.is_open());
    CHECK(window.in_flight() == 0);
}

TEST_CASE("window: frames go out in order, and again from the oldest", "[wire]") {
    StreamWindow window;
    window.open(4);
    for (int k = 0; k < 3; ++k) push(window, k);
    CHECK(sent_mark(window) == 0);
    CHECK(sent_mark(window) == 1);
    window.answer_oldest();
    window.rewind();
    CHECK(sent_mark(window) == 1);
    CHECK(sent_mark(window) == 2);
    CHECK(sent_mark(window) == -1);
    window.rewind();
    // Answered before it went out again: it must not go out.
    window.answer_oldest();
    CHECK(sent_mark(window) == 2);
    push(window, 3);
    CHECK(sent_mark(window) == 3);
}

TEST_CASE("window: places of answers around the wrap of 16 bits", "[wire]") {
    StreamWindow window;
    window.open(5);
    for (int k = 0; k < 65534; ++k) {
        push(window, 0);
        window.answer_oldest();
    }
    for (int k = 0; k < 4; ++k) push(window, 10 + k);  // 65534, 65535, 0, 1
    CHECK(window.place_of(65533) == Place::outside);
    CHECK(window.place_of(65534) == Place::oldest);
    CHECK(window.place_of(65535) == Place::later);
    CHECK(window.place_of(0) == Place::later);
    CHECK(window.place_of(1) == Place::later);
    CHECK(window.place_of(2) == Place::outside);
    CHECK(window.place_of(32768) == Place::outside);
    // The board may have processed all of them, but none that was never sent.
    CHECK(window.may_be_expected(65534));
    CHECK(window.may_be_expected(2));
    CHECK_FALSE(window.may_be_expected(3));
    CHECK_FALSE(window.may_be_expected(65533));
    CHECK(window.find(0)->at == 12);
    CHECK(window.find(2) == nullptr);
    CHECK(window.next_seq() == 2);
    CHECK(window.oldest_number() == 65534);
}
