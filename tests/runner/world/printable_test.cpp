#include "runner/world/printable.hpp"

#include <catch2/catch.hpp>

#include "runner/world/cautions.hpp"

using namespace halflsb;

TEST_CASE("printable: control characters are shown, other text stays", "[world]") {
    CHECK(printable("checkweigher CW-7, 6000 g ± 1, Prüfstand 3, \\ and \"") ==
          "checkweigher CW-7, 6000 g ± 1, Prüfstand 3, \\ and \"");
    CHECK(printable("\x1b[31m\r\n\t\x7f") == "\\x1b[31m\\x0d\\x0a\\x09\\x7f");
    CHECK(printable(std::string_view("\0", 1)) == "\\x00");
    CHECK(printable("\xc2\x9b"
                    "31m") == "\\x9b31m");  // a control sequence in one character
    CHECK(printable("") == "");
}

TEST_CASE("printable: signs that turn or break a line are shown", "[world]") {
    CHECK(printable("a\u202eb\u2066c\u200fd\u2028e\ufefff") == "a\\u202eb\\u2066c\\u200fd\\u2028e\\ufefff");
}

TEST_CASE("printable: of several lines the breaks stay", "[world]") {
    CHECK(printable_lines("a\n\tb\r\x1b") == "a\n b\\x0d\\x1b");
}

TEST_CASE("printable: what is no UTF-8 is shown byte by byte or replaced", "[world]") {
    // Alone, overlong, a surrogate, beyond U+10FFFF, cut off: Unicode 15 table 3-7.
    for (const std::string bytes :
         {"\xff", "\x80", "\xc0\xaf", "\xe0\x9f\xbf", "\xed\xa0\x80", "\xf4\x90\x80\x80", "\xe2\x82", "\xf0\x9f\x92"}) {
        std::string shown, replaced;
        for (const char c : bytes) {
            const auto byte = static_cast<unsigned char>(c);
            shown += "\\x";
            shown += "0123456789abcdef"[byte >> 4];
            shown += "0123456789abcdef"[byte & 15];
            replaced += "\xEF\xBF\xBD";
        }
        INFO(shown);
        CHECK(printable(bytes) == shown);
        CHECK(valid_utf8(bytes + "x") == replaced + "x");
        CHECK(utf8_sequence_bytes(bytes) == 0);
    }
}

TEST_CASE("printable: the ends of each length of UTF-8 are taken", "[world]") {
    for (const std::string text : {"\x01", "\x7e", "\xc2\xa0", "\xdf\xbf", "\xe0\xa0\x80", "\xed\x9f\xbf",
                                   "\xee\x80\x80", "\xef\xbf\xbd", "\xf0\x90\x80\x80", "\xf4\x8f\xbf\xbf"}) {
        CHECK(utf8_sequence_bytes(text) == text.size());
        CHECK(valid_utf8(text) == text);
        CHECK(columns_of(text) == 1);
    }
    CHECK(utf8_sequence_bytes("") == 0);
}

TEST_CASE("cautions: name what must be disconnected and what a report is not", "[world]") {
    std::string all;
    for (const auto sentence : cautions()) all += std::string(sentence) + "\n";
    for (const char* word :
         {"actuators", "mains", "patients", "loads", "Local codes", "licensed practice", "not a safety approval"}) {
        CHECK(all.find(word) != std::string::npos);
    }
    CHECK(evidence_caution() ==
          "evidence about the filter on the tested unit at its injection point, not a safety approval");
}
