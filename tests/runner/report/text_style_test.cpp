#include "runner/report/text_style.hpp"

#include <catch2/catch.hpp>

#include "runner/world/printable.hpp"

using namespace halflsb;

namespace {
TextStyle width(int columns) {
    TextStyle style;
    style.width = columns;
    return style;
}
}  // namespace

TEST_CASE("wrapping: lines break at blanks and never pass the width", "[report]") {
    CHECK(wrapped(width(10), "one two three", 0) == "one two\nthree\n");
    CHECK(wrapped(width(10), "1234567890", 0) == "1234567890\n");
    CHECK(wrapped(width(10), "1234567890 x", 0) == "1234567890\nx\n");
    CHECK(wrapped(width(10), "one two three", 4) == "    one\n    two\n    three\n");
    CHECK(wrapped(width(10), "", 4) == "\n");
}

TEST_CASE("wrapping: a word longer than a line stays whole", "[report]") {
    CHECK(wrapped(width(10), "a /dev/serial/by-id/usb b", 0) == "a\n/dev/serial/by-id/usb\nb\n");
}

TEST_CASE("wrapping: line breaks and leading blanks of the text stay", "[report]") {
    CHECK(wrapped(width(12), "first\n  second third", 1) == " first\n   second\n   third\n");
    CHECK(wrapped(width(12), "a\n\nb", 0) == "a\n\nb\n");
}

TEST_CASE("wrapping: a code point counts as one column, whatever its bytes", "[report]") {
    CHECK(wrapped(width(5), "äöüß äöüß", 0) == "äöüß\näöüß\n");
    CHECK(columns_of("äöü") == 3);
    CHECK(first_columns("äöü", 2) == "äö");
    CHECK(first_columns("äöü", 0) == "");
    CHECK(first_columns("äöü", 9) == "äöü");
}

TEST_CASE("cutting: what does not fit loses its middle, for names of one each differ at their ends", "[report]") {
    CHECK(cut_to(width(80), "checkweigher", 12) == "checkweigher");
    CHECK(cut_to(width(80), "checkweigher", 11) == "check…igher");
    TextStyle ascii;
    ascii.unicode = false;
    CHECK(cut_to(ascii, "checkweigher", 11) == "chec...gher");
    CHECK(cut_to(ascii, "checkweigher", 2) == "ch");
}

TEST_CASE("colour: only where the style has it, and always switched off again", "[report]") {
    TextStyle style;
    CHECK(painted(style, Ink::bad, "fail") == "fail");
    style.colour = true;
    CHECK(painted(style, Ink::bad, "fail") == "\x1b[1;31mfail\x1b[0m");
    CHECK(painted(style, Ink::good, "pass") == "\x1b[32mpass\x1b[0m");
    CHECK(painted(style, Ink::plain, "pass") == "pass");
}

TEST_CASE("table: columns are left out in their order until the lines fit", "[report]") {
    Table table;
    table.columns = {{"a", false, 0}, {"bbbb", true, 2}, {"cccc", true, 1}, {"dd", true, 0}};
    table.rows = {{"x", "1", "2", "3"}};
    CHECK(laid_out(width(17), table) == "a  bbbb  cccc  dd\nx     1     2   3\n");
    CHECK(laid_out(width(16), table) == "a  bbbb  dd\nx     1   3\n");
    CHECK(laid_out(width(10), table) == "a  dd\nx   3\n");
    std::size_t taken = 0;
    CHECK(laid_out(width(2), table, &taken) == "a  dd\nx   3\n");
    CHECK(taken == 5);
}
