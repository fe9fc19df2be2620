#include "runner/report/people.hpp"

#include <catch2/catch.hpp>
#include <clocale>
#include <cmath>
#include <limits>

using namespace halflsb;

TEST_CASE("people: a number shows four significant digits and no trailing zeros", "[report]") {
    CHECK(rounded_text(0.0) == "0");
    CHECK(rounded_text(-0.0) == "0");
    CHECK(rounded_text(0.5) == "0.5");
    CHECK(rounded_text(0.49949) == "0.4995");
    CHECK(rounded_text(-0.010004) == "-0.01");
    CHECK(rounded_text(9.99996) == "10");
    CHECK(rounded_text(61.23456) == "61.23");
    CHECK(rounded_text(1234.56) == "1235");
    CHECK(rounded_text(0.00012345) == "0.0001234");  // the double lies below the tie
    CHECK(rounded_text(0.000099) == "9.9e-05");
    CHECK(rounded_text(1.5e12 + 0.5) == "1.5e+12");
}

TEST_CASE("people: a whole number keeps all its digits", "[report]") {
    CHECK(rounded_text(-2147483648.0) == "-2147483648");
    CHECK(rounded_text(100.0) == "100");
    CHECK(rounded_text(1e15) == "1e+15");
}

TEST_CASE("people: what is no finite number is said in words", "[report]") {
    CHECK(rounded_text(std::numeric_limits<double>::quiet_NaN()) == "not a number");
    CHECK(rounded_text(HUGE_VAL) == "infinite");
    CHECK(rounded_text(-HUGE_VAL) == "-infinite");
    CHECK(fixed_text(-HUGE_VAL, 3) == "-infinite");
}

TEST_CASE("people: a value just beyond its limit never looks equal to it", "[report]") {
    CHECK(compared_text(0.50000001, 0.5) == std::pair<std::string, std::string>{"0.50000001", "0.5"});
    CHECK(compared_text(0.49999, 0.5) == std::pair<std::string, std::string>{"0.49999", "0.5"});
    CHECK(compared_text(0.5, 0.5) == std::pair<std::string, std::string>{"0.5", "0.5"});
    CHECK(compared_text(1.5, 0.5) == std::pair<std::string, std::string>{"1.5", "0.5"});
}

TEST_CASE("people: fixed decimals have no negative zero", "[report]") {
    CHECK(fixed_text(-0.0001, 3) == "0.000");
    CHECK(fixed_text(-0.0006, 3) == "-0.001");
    CHECK(fixed_text(16370.25, 3) == "16370.250");
}

TEST_CASE("people: counts are grouped from ten thousand on", "[report]") {
    CHECK(count_text(0) == "0");
    CHECK(count_text(9999) == "9999");
    CHECK(count_text(10000) == "10,000");
    CHECK(count_text(-1234567) == "-1,234,567");
    CHECK(count_text(std::numeric_limits<std::int64_t>::min()) == "-9,223,372,036,854,775,808");
    CHECK(counted(1, "case", "cases") == "1 case");
    CHECK(counted(0, "case", "cases") == "0 cases");
}

TEST_CASE("people: a duration changes its unit before it rounds up to it", "[report]") {
    CHECK(duration_text(0.0) == "0 s");
    CHECK(duration_text(1e-9) == "1 us");
    CHECK(duration_text(0.00025) == "250 us");
    CHECK(duration_text(0.25) == "250 ms");
    CHECK(duration_text(0.9994) == "999 ms");
    CHECK(duration_text(0.9996) == "1 s");
    CHECK(duration_text(12.34) == "12.3 s");
    CHECK(duration_text(59.94) == "59.9 s");
    CHECK(duration_text(59.97) == "1 min 0 s");
    CHECK(duration_text(3599.6) == "1 h 0 min");
    CHECK(duration_text(7500) == "2 h 5 min");
    CHECK(duration_text(std::numeric_limits<double>::quiet_NaN()) == "0 s");
}

TEST_CASE("people: rates are in Hz or kHz", "[report]") {
    CHECK(rate_text(1200.0) == "1200 Hz");
    CHECK(rate_text(48000.0) == "48 kHz");
    CHECK(rate_text(44100.0) == "44.1 kHz");
}

TEST_CASE("people: the decimal point does not follow the locale", "[report]") {
    // Whichever of these is installed; the functions must not look at it in any case.
    const bool comma = std::setlocale(LC_ALL, "de_DE.UTF-8") != nullptr || std::setlocale(LC_ALL, "de_DE") != nullptr;
    INFO("a locale with a decimal comma is " << (comma ? "in use" : "not installed"));
    CHECK(rounded_text(0.5) == "0.5");
    CHECK(fixed_text(1.25, 2) == "1.25");
    std::setlocale(LC_ALL, "C");
}
