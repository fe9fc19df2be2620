#include "oracle/filters/windowed_sinc.hpp"

#include <algorithm>

#include "tests/oracle/filters/make.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

double gain(const FilterChain& chain, double f) { return std::abs(response_at(chain, f)); }

WindowedSinc low_pass(int taps, double corner, Window window) {
    WindowedSinc design;
    design.taps = taps;
    design.lower_hz = design.upper_hz = corner;
    design.window = window;
    return design;
}

}  // namespace

TEST_CASE("windowed sinc: the published taps (SEEN formulas, COMPUTED)", "[filters][published]") {
    const CsvTable table("fir-windowed-sinc.csv");
    std::size_t compared = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const std::string window = table.text(row, "window");
        // Design F is left at the scale of the ideal response, which no plan asks for.
        if (table.text(row, "design") == "F") continue;
        const auto made = make("windowed-sinc", {{"response", std::string("low-pass")},
                                                 {"taps", whole(static_cast<int>(table.number(row, "number of taps")))},
                                                 {"corner_hz", 0.5 * table.number(row, "cutoff")},
                                                 {"window", window}});
        REQUIRE(made);
        const auto& taps = std::get<Fir>(made->design).taps;
        const auto n = static_cast<std::size_t>(table.number(row, "tap index"));
        INFO("design " << table.text(row, "design") << ", tap " << n);
        // The table's sine of pi x at whole x is 1e-16, ours is 0.
        CHECK_THAT(taps.at(n), Catch::WithinAbs(table.number(row, "h[n]"), 2e-16));
        ++compared;
    }
    CHECK(compared == table.rows() - 11);
}

TEST_CASE("windowed sinc: 101 taps reach the published stop bands (book MEMORY, COMPUTED)", "[filters][published]") {
    const CsvTable table("fir-window-performance.csv");
    std::size_t compared = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const std::string name = table.text(row, "window");
        WindowedSinc design = low_pass(101, 0.2, Window::rectangular);
        double book_db = -21.0;
        if (name == "hann") design.window = Window::hann, book_db = -44.0;
        if (name == "hamming") design.window = Window::hamming, book_db = -53.0;
        if (name == "blackman") design.window = Window::blackman, book_db = -74.0;
        if (name.rfind("kaiser", 0) == 0 || name.rfind("('kaiser'", 0) == 0) {
            design.window = Window::kaiser;
            design.kaiser_beta = 8.6;
            book_db = table.number(row, "stopband [dB]");  // no figure of the book
        }
        const FilterChain chain{stage(designed_taps(design))};
        double peak = 0.0, before = 0.0, here = gain(chain, 0.5);
        for (int i = 5000; i-- > 2000;) {
            const double next = gain(chain, i * 1e-4);
            if (here >= before && here > next) peak = std::max(peak, here);
            before = here;
            here = next;
        }
        INFO(name);
        CHECK_THAT(20.0 * std::log10(peak), Catch::WithinAbs(table.number(row, "stopband [dB]"), 0.01));
        CHECK_THAT(20.0 * std::log10(peak), Catch::WithinAbs(book_db, 1.5));
        ++compared;
    }
    CHECK(compared == 5);
}

TEST_CASE("windowed sinc: taps are symmetric to the last bit and have gain 1 where it is promised", "[filters]") {
    struct Row {
        const char* response;
        double corner, from, to, reference;
        int taps;
    };
    for (const Row& row : {Row{"low-pass", 0.11, 0, 0, 0.0, 40}, Row{"high-pass", 0.31, 0, 0, 0.5, 41},
                           Row{"band-pass", 0, 0.1, 0.24, 0.17, 60}, Row{"band-stop", 0, 0.1, 0.24, 0.0, 61}}) {
        for (const char* window : {"rectangular", "hann", "hamming", "blackman", "kaiser"}) {
            ParameterValues values = words(
                {{"response", std::string(row.response)}, {"taps", whole(row.taps)}, {"window", std::string(window)}});
            if (row.corner > 0) values.set("corner_hz", row.corner);
            if (row.from > 0) values.set("from_hz", row.from);
            if (row.to > 0) values.set("to_hz", row.to);
            if (window == std::string("kaiser")) values.set("kaiser_beta", 6.0);
            const auto made = make_stage("windowed-sinc", values);
            REQUIRE(made);
            auto taps = std::get<Fir>(made->design).taps;
            INFO(row.response << ' ' << window);
            CHECK_THAT(gain({*made}, row.reference), Catch::WithinAbs(1.0, 1e-14));
            auto turned = taps;
            std::reverse(turned.begin(), turned.end());
            CHECK(taps == turned);
            // The window method's corner is half amplitude, but for the window's own ripple.
            if (window != std::string("rectangular")) {
                CHECK_THAT(gain({*made}, row.corner > 0 ? row.corner : row.from), Catch::WithinAbs(0.5, 0.02));
            }
        }
    }
}

TEST_CASE("windowed sinc: high-pass and low-pass of the same corner add up to a delay", "[filters]") {
    // Without a window's scale: rectangular, and each divided by its own gain, so both are brought back.
    WindowedSinc low = low_pass(31, 0.2, Window::hamming), high = low;
    high.shape = ResponseShape::high_pass;
    const Fir a = designed_taps(low), b = designed_taps(high);
    // h_low / g_low and (delta - h_low) / g_high: from the centre taps 2 f and 1 - 2 f both gains follow.
    const double g_low = 0.4 / a.taps[15], g_high = 0.6 / b.taps[15];
    for (std::size_t n = 0; n < 31; ++n) {
        CHECK_THAT(g_low * a.taps[n] + g_high * b.taps[n], Catch::WithinAbs(n == 15 ? 1.0 : 0.0, 1e-15));
    }
}

TEST_CASE("windowed sinc: a long filter keeps the phase of its sine", "[filters]") {
    // Tap 30,000 from the middle: sin(2 pi 0.123456789 30000) / (pi 30000); the argument is 23,270.8 radians, so a sine
    // taken of a rounded argument would be off by 4e-12.
    const Fir fir = designed_taps(low_pass(60001, 0.123456789, Window::rectangular));
    const double ratio = fir.taps[0] / fir.taps[30000];
    // 30000 x 0.123456789 = 3703.70367 turns.
    const double turns = 0.70367, expected = std::sin(2.0 * 3.14159265358979323846 * turns) /
                                             (3.14159265358979323846 * 30000.0 * 2.0 * 0.123456789);
    CHECK_THAT(ratio, Catch::WithinRel(expected, 2e-12));  // 30000 times half an ulp of 0.123456789: 2e-13 turns
}

TEST_CASE("windowed sinc: what cannot be is refused", "[filters]") {
    const StageContext at_1000{.rate_hz = 1000.0};
    const auto given = [&](std::initializer_list<Given> list) { return refusal("windowed-sinc", list, at_1000); };
    const std::string low = "low-pass", high = "high-pass", stop = "band-stop";
    CHECK(given({{"response", high}, {"taps", whole(63)}, {"corner_hz", 100.0}}) == "accepted");
    CHECK(given({{"response", high}, {"taps", whole(64)}, {"corner_hz", 100.0}}) ==
          "taps: 64 taps, an even number, pass nothing at half the rate, where a high-pass must\n"
          "  give 63 or 65 taps");
    CHECK(given({{"response", stop}, {"taps", whole(64)}, {"from_hz", 100.0}, {"to_hz", 200.0}}) ==
          "taps: 64 taps, an even number, pass nothing at half the rate, where a band-stop must\n"
          "  give 63 or 65 taps");
    CHECK(given({{"response", low}, {"taps", whole(64)}, {"corner_hz", 100.0}}) == "accepted");
    CHECK(given({{"response", low}, {"taps", whole(2)}, {"corner_hz", 100.0}, {"window", std::string("hann")}}) ==
          "taps: a window of 2 taps that is hann is 0 at both\n  give 3 taps or more");
    CHECK(given({{"response", low}, {"taps", whole(3)}, {"corner_hz", 100.0}, {"window", std::string("hann")}}) ==
          "accepted");
    const auto stop_band = [&](double from_hz, int taps) {
        return given({{"response", stop},
                      {"taps", whole(taps)},
                      {"from_hz", from_hz},
                      {"to_hz", 101.0},
                      {"window", std::string("rectangular")}});
    };
    const std::string nothing = " taps let next to nothing through where this band-stop should have gain 1\n  ";
    CHECK(stop_band(1.0, 29) ==
          "taps: 29" + nothing + "give about 4001 taps, 4 rate_hz over the width of the narrowest part");
    CHECK(stop_band(1.0, 4001) == "accepted");
    CHECK(stop_band(0.001, 9) ==
          "taps: 9" + nothing + "move the corners: 65536 taps, the most, make no part narrower than 0.0610352 Hz");
    CHECK(given({{"response", low}, {"taps", whole(27)}, {"corner_hz", 9.0}, {"window", std::string("kaiser")}}) ==
          "kaiser_beta: kaiser_beta is missing\n"
          "  give kaiser_beta: 5.65 for a stop band of -60 dB, 8.96 for -90 dB");
    CHECK(given({{"response", low}, {"taps", whole(27)}, {"corner_hz", 100.0}, {"kaiser_beta", 5.0}}) ==
          "kaiser_beta: kaiser_beta belongs to the window kaiser\n"
          "  give window = \"kaiser\", or leave kaiser_beta out");
    CHECK(given({{"response", low}, {"taps", whole(27)}, {"corner_hz", 500.0}}) ==
          "corner_hz: 500 Hz is not below half the sample rate, 500 Hz\n  give less than 500 Hz");
    CHECK(given({{"response", low}, {"taps", whole(65537)}, {"corner_hz", 100.0}}) ==
          "taps: 65537 taps is above the largest, 65536 taps\n  give 65536 or less");
    CHECK(given({{"response", low}, {"taps", whole(5)}, {"corner_hz", 9.0}, {"coefficient_fraction_bits", whole(0)}}) ==
          "coefficient_fraction_bits: with 0 fraction bits all taps are 0\n"
          "  store the coefficients with 1 fraction bits or more");
}
