#include "runner/shell_words.hpp"

#include <catch2/catch.hpp>

#include "runner/world/printable.hpp"

using namespace halflsb;

TEST_CASE("shell words: plain ones stay, others stand in single quotes", "[run]") {
    CHECK(shell_quoted("plans/cw7.toml") == "plans/cw7.toml");
    CHECK(shell_quoted("tare step") == "'tare step'");
    CHECK(shell_quoted("it's $(x) *") == "'it'\\''s $(x) *'");
    CHECK(shell_quoted("") == "''");
    CHECK(shell_quoted("K\xC3\xA4se") == "'K\xC3\xA4se'");
}

TEST_CASE("shell words: what a report must escape is written so that bash reads the bytes back", "[run]") {
    CHECK(shell_quoted("pl\xff.toml") == "$'pl\\xff.toml'");
    CHECK(shell_quoted("a'b\\c\x1b") == "$'a\\'b\\\\c\\x1b'");
    CHECK(shell_quoted("\xE2\x80\xAE") == "$'\\xe2\\x80\\xae'");  // turns the direction of text
    for (const std::string word : {"pl\xff", "a\nb", "\xE2\x80\xAE"})
        CHECK(printable(shell_quoted(word)) == shell_quoted(word));
}

TEST_CASE("shell words: a case that looks like an option is not taken for one", "[run]") {
    CHECK(case_option("tare step") == "--case 'tare step'");
    CHECK(case_option("--help") == "--case=--help");
}
