#include "runner/config/source_text.hpp"

#include <catch2/catch.hpp>

#include "runner/config/problems.hpp"

using namespace halflsb;

TEST_CASE("source text: a problem shows its line, a caret and a remedy", "[config]") {
    const SourceText source("plan.toml", "one\ntwo = 2\nthree\n");
    CHECK(source.render({2, 5}, "no number", "write 3") ==
          "plan.toml:2:5: no number\n    two = 2\n        ^\n  write 3");
    CHECK(source.render({3, 1}, "x", "") == "plan.toml:3:1: x\n    three\n    ^");
    // Behind the last character, and behind the last line: still a line and a caret.
    CHECK(source.render({3, 6}, "x", "") == "plan.toml:3:6: x\n    three\n         ^");
    CHECK(source.render({4, 1}, "x", "") == "plan.toml:4:1: x\n    \n    ^");
    CHECK(source.render({9, 9}, "x", "") == "plan.toml:9:9: x\n    \n    ^");
}

TEST_CASE("source text: a tab is one column, and so is a character of several bytes", "[config]") {
    const SourceText source("f", "\ta = \"\xC3\xA9\xE2\x82\xAC\" ! \n");
    CHECK(source.place_of_byte(0) == Place{1, 1});
    CHECK(source.place_of_byte(12) == Place{1, 10});
    CHECK(source.render({1, 11}, "p", "r") == "f:1:11: p\n     a = \"\xC3\xA9\xE2\x82\xAC\" ! \n              ^\n  r");
}

TEST_CASE("source text: CR LF, a byte order mark and a missing last line break are no columns", "[config]") {
    const SourceText source("f",
                            "\xEF\xBB\xBF"
                            "a\r\nbc");
    CHECK(source.line(1) == "a");
    CHECK(source.line(2) == "bc");
    CHECK(source.line(3).empty());
    CHECK(source.line(0).empty());
    CHECK(source.line_count() == 2);
    CHECK(source.place_of_byte(4) == Place{2, 2});
    CHECK(SourceText("f", "").line_count() == 1);
    CHECK(SourceText("f", "a\n").line_count() == 1);
    CHECK(SourceText("f", "a\n\n").line_count() == 2);
}

TEST_CASE("source text: a long line is cut to its width around the caret", "[config]") {
    const std::string long_line = std::string(200, 'a') + "!" + std::string(200, 'b');
    const SourceText source("f", long_line);
    const auto caret_sits_on = [&](int column, char expected, bool cut_before, bool cut_after) {
        const std::string text = source.render({1, column}, "p", "");
        const std::size_t line_at = text.find('\n') + 1, caret_line_at = text.find('\n', line_at) + 1;
        const std::string line = text.substr(line_at, caret_line_at - line_at - 1),
                          caret_line = text.substr(caret_line_at);
        CHECK(line.size() == 4 + shown_line_columns);
        CHECK(line[caret_line.size() - 1] == expected);
        CHECK((line.substr(4, 3) == "...") == cut_before);
        CHECK((line.substr(line.size() - 3) == "...") == cut_after);
    };
    caret_sits_on(1, 'a', false, true);
    caret_sits_on(80, 'a', false, true);
    caret_sits_on(201, '!', true, true);
    caret_sits_on(401, 'b', true, false);
    const SourceText fits("f", std::string(shown_line_columns, 'x'));
    CHECK(fits.render({1, 1}, "p", "") == "f:1:1: p\n    " + std::string(shown_line_columns, 'x') + "\n    ^");
}

TEST_CASE("source text: what could drive a terminal is shown harmless", "[config]") {
    const SourceText source("f\x1b[2J", "a\x1b[31m = 1\n");
    CHECK(source.render({1, 8}, "p", "") == "f\\x1b[2J:1:8: p\n    a\\x1b[31m = 1\n              ^");
    CHECK(quoted("a\nb") == "\"a\\x0ab\"");
    CHECK(quoted(std::string(61, 'x')) == "\"" + std::string(57, 'x') + "...\"");
    CHECK(quoted(std::string(60, 'x')) == "\"" + std::string(60, 'x') + "\"");
}

TEST_CASE("source text: what is no text is refused where it stops being text", "[config]") {
    CHECK(!SourceText("f", "all \xC3\xA9 good\n").not_text());
    CHECK(SourceText("f", "a\nb\xC3(\n").not_text() ==
          "f:2:2: the byte \\xc3 is not UTF-8\n    b\\xc3(\n     ^\n  save it as UTF-8 text");
    // An overlong form and a surrogate are no UTF-8 either.
    CHECK(SourceText("f", "\xC0\xAF").not_text());
    CHECK(SourceText("f", "\xED\xA0\x80").not_text());
    CHECK(SourceText("f", std::string("ab\0", 3)).not_text() ==
          "f:1:3: a NUL byte; this is not a text file\n    ab\\x00\n      ^\n  save it as UTF-8 text");
    // UTF-16 with its byte order mark.
    CHECK(SourceText("f", std::string("\xFF\xFEt\0", 4)).not_text() ==
          "f:1:1: the byte \\xff is not UTF-8\n    \\xff\\xfet\\x00\n    ^\n  save it as UTF-8 text");
}

TEST_CASE("problems: are shown in the order of their places, equal ones as they came", "[config]") {
    const SourceText source("f", "a\nb\n");
    Problems problems(source);
    problems.add({2, 1}, "third", "");
    problems.add({1, 2}, "second", "");
    problems.add({1, 1}, "first", "");
    problems.add_rendered({2, 1}, "fourth");
    const std::vector<std::string> texts = problems.sorted().texts;
    REQUIRE(texts.size() == 4);
    CHECK(texts[0].find("first") != std::string::npos);
    CHECK(texts[1].find("second") != std::string::npos);
    CHECK(texts[2].find("third") != std::string::npos);
    CHECK(texts[3] == "fourth");
}

TEST_CASE("problems: of several files each shows its own line, in the order in which the files were opened",
          "[config]") {
    const SourceText plan("lab/plan.toml", "a\nb\n"), common("lab/common.toml", "c\nd\n");
    Problems problems(plan, "plan.toml");
    REQUIRE(problems.add_source(common, "common.toml") == 1);
    problems.add({1, 1, 1}, "p", "r");
    problems.add({2, 1}, "q", "r");
    CHECK(problems.sorted().texts == std::vector<std::string>{"lab/plan.toml:2:1: q\n    b\n    ^\n  r",
                                                              "lab/common.toml:1:1: p\n    c\n    ^\n  r"});
    CHECK(problems.file_of({7, 1, 1}) == "common.toml");
    CHECK(problems.file_of({7, 1}) == "plan.toml");
    CHECK(problems.place_in("common.toml", 2, 3) == Place{2, 3, 1});
    CHECK(problems.line_text({2, 1, 1}, {1, 1, 1}) == "line 2");
    CHECK(problems.line_text({2, 1, 1}, {1, 1}) == "line 2 of lab/common.toml");
}

TEST_CASE("problems: what is said twice at one place is told once, but counted", "[config]") {
    const SourceText source("f", "a\n");
    Problems problems(source);
    problems.add({1, 1}, "p", "r");
    problems.add({1, 1}, "p", "r");
    problems.add({1, 1}, "q", "r");
    CHECK(problems.count() == 3);
    CHECK(problems.sorted().texts.size() == 2);
}
