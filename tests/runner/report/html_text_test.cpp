#include "runner/report/html_text.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <nlohmann/json.hpp>
#include <random>

#include "tests/support/rounds.hpp"

using namespace halflsb;

TEST_CASE("html text: signs of HTML are references, and control characters visible", "[report]") {
    CHECK(html_text("a < b & \"c\" > 'd'") == "a &lt; b &amp; &quot;c&quot; &gt; &#39;d&#39;");
    CHECK(html_text("&lt;") == "&amp;lt;");
    CHECK(html_text("\x1b[31m\xff\xe2\x80\xae") == "\\x1b[31m\\xff\\u202e");
    CHECK(html_text("Grüße\nzwei") == "Grüße\nzwei");
    CHECK(html_element("td", "number", "<b>") == "<td class=\"number\">&lt;b&gt;</td>");
    CHECK(html_element("p", "", "x") == "<p>x</p>");
}

TEST_CASE("html text: a string within a script cannot end it, and reads back as it was", "[report]") {
    const std::string hostile = "</script><!-- \xe2\x80\xa8\xe2\x80\xa9 \" \\ ' & \xf0\x9f\x8e\x9a é";
    const std::string text = script_string(hostile);
    for (const char* const sign : {"<", ">", "&", "'", "/"}) CHECK(text.find(sign) == std::string::npos);
    for (const char c : text) CHECK(static_cast<unsigned char>(c) < 0x80);
    // Line separators mislead a reader and were made visible before.
    CHECK(nlohmann::json::parse(text) == "</script><!-- \\u2028\\u2029 \" \\ ' & \xf0\x9f\x8e\x9a é");
}

TEST_CASE("html text: whatever the bytes, they make one string of JSON and no markup", "[report]") {
    const auto seed = std::random_device()();
    INFO("seed " << seed);
    std::mt19937 random(seed);
    const std::string pieces[] = {"<", ">", "&", "\"", "'", "\\", "/", "script", "\xe2\x80\xa8", "\xf0\x9f\x8e\x9a"};
    for (int round = 0; round < test::rounds_of(2000); ++round) {
        std::string text;
        for (std::size_t i = random() % 20; i > 0; --i)
            text += random() % 2 == 0 ? pieces[random() % std::size(pieces)] : std::string(1, static_cast<char>(random()));
        CHECK(nlohmann::json::parse(script_string(text)).is_string());
        CHECK(html_text(text).find_first_of("<>\"'") == std::string::npos);
        CHECK(script_string(text).find_first_of("<>&'/") == std::string::npos);
    }
}

TEST_CASE("html text: numbers are those of JSON", "[report]") {
    CHECK(script_number(0.1 + 0.2, 6) == "0.3");
    CHECK(script_number(1234567.0, 3) == "1234567");
    CHECK(script_number(-0.0, 3) == "0");
    CHECK(script_number(NAN, 6) == "null");
    CHECK(script_number(-HUGE_VAL, 6) == "null");
    CHECK(script_number(1.5e300, 6) == "1.5e+300");
    CHECK(number_attribute(0.499991234) == "0.499991234");
    CHECK(number_attribute(NAN).empty());
}
