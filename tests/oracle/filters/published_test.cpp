// Against tests/published; the mark in brackets is the provenance of the figures (README there).
#include "oracle/filters/stability.hpp"
#include "tests/oracle/support.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

double gain(const FilterChain& chain, double f) { return std::abs(response_at(chain, f)); }

std::vector<double> windowed_sinc(const CsvTable& table, const std::string& design) {
    std::vector<double> taps;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        if (table.text(row, "design") == design) taps.push_back(table.number(row, "h[n]"));
    }
    return taps;
}

double db(double ratio) { return 20.0 * std::log10(ratio); }

}  // namespace

TEST_CASE("published: moving average, amplitude and phase (SEEN-2 formula, COMPUTED, OCTAVE)", "[filters][published]") {
    const CsvTable table("moving-average-magnitude.csv");
    REQUIRE(table.rows() == 3 * 23);
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const int points = static_cast<int>(table.number(row, "M"));
        const double f = table.number(row, "f ["), amplitude = table.number(row, "signed amplitude");
        const auto h = response_at({stage(MovingAverage{points})}, f);
        INFO("M " << points << ", f " << f);
        // The table was made with other roundings of pi f M, at most 8 pi 2^-53 apart: 3e-15.
        CHECK_THAT(std::abs(h), Catch::WithinAbs(std::fabs(amplitude), 3e-15));
        if (table.number(row, "is_null") == 1.0) continue;
        const double phase = table.number(row, "phase") * 3.14159265358979323846 / 180.0;
        CHECK(std::abs(h - std::polar(std::fabs(amplitude), phase)) < 1e-14);
    }
}

TEST_CASE("published: moving average, cut-offs, side lobe, delay and noise gain (COMPUTED)", "[filters][published]") {
    const CsvTable table("moving-average-summary.csv");
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const int points = static_cast<int>(table.number(row, "M"));
        const FilterChain chain{stage(MovingAverage{points})};
        INFO("M " << points);
        // Roots of the table to 2^-52 of f, times a slope of at most pi M / 2.
        const double tolerance = 1e-14 * points;
        CHECK_THAT(gain(chain, table.number(row, "-3.0103 dB")), Catch::WithinAbs(std::sqrt(0.5), tolerance));
        CHECK_THAT(gain(chain, table.number(row, "-6.0206 dB")), Catch::WithinAbs(0.5, tolerance));
        CHECK(gain(chain, table.number(row, "first null")) < tolerance);
        if (table.has(row, "first sidelobe peak frequency")) {
            // Flat at the peak: its place to 1e-8 moves the level by 1e-14.
            CHECK_THAT(gain(chain, table.number(row, "first sidelobe peak frequency")),
                       Catch::WithinAbs(table.number(row, "first sidelobe peak magnitude"), 1e-12));
        }
        double noise_gain = 0.0, moment = 0.0;
        const auto h = impulse_response(chain, 100);
        for (std::size_t n = 0; n < h.size(); ++n) {
            noise_gain += h[n] * h[n];
            moment += static_cast<double>(n) * h[n];
        }
        CHECK_THAT(noise_gain, Catch::WithinRel(table.number(row, "noise power gain [1]"), 1e-14));
        CHECK_THAT(noise_gain, Catch::WithinRel(1.0 / points, 1e-14));
        CHECK_THAT(moment, Catch::WithinRel(table.number(row, "group delay"), 1e-13));
    }
}

TEST_CASE("published: -3 dB of a moving average is about 0.44294 / sqrt(M^2 - 1) (SEEN-2)", "[filters][published]") {
    // The stated errors of the approximation: 2.3 % at M = 2, 0.46 % at 4, 0.07 % at 10 (COMPUTED).
    const CsvTable table("moving-average-summary.csv");
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double m = table.number(row, "M");
        const double allowed = m == 2 ? 0.0235 : m == 4 ? 0.0047 : m == 10 ? 0.00075 : 0.0235;
        const double estimate = 0.44294 / std::sqrt(m * m - 1.0);
        CHECK_THAT(estimate, Catch::WithinRel(table.number(row, "-3.0103 dB"), allowed));
    }
}

TEST_CASE("published: noise through a moving average of M points falls to 1/M of its power (COMPUTED)",
          "[filters][published]") {
    const std::uint64_t seed = 99;
    INFO("seed " << seed);
    const auto in = noise(400000, seed);
    double power_in = 0.0;
    for (const double x : in) power_in += x * x;
    for (const int points : {4, 16, 64}) {
        const auto out = run({stage(MovingAverage{points})}, in);
        double power_out = 0.0;
        for (const double y : out) power_out += y * y;
        // Neighbours correlate over M: relative spread sqrt(4 M / (3 N)), 1.5 % at M = 64; six of them.
        CHECK_THAT(power_out / power_in * points,
                   Catch::WithinAbs(1.0, 6.0 * std::sqrt(4.0 * points / 3.0 / 400000.0)));
    }
}

TEST_CASE("published: windowed sinc taps, DC gain and half amplitude at the cut-off (SEEN formulas, COMPUTED)",
          "[filters][published]") {
    const CsvTable table("fir-windowed-sinc.csv");
    for (const std::string design : {"A", "B", "C", "D", "E", "F", "G"}) {
        const auto taps = windowed_sinc(table, design);
        const FilterChain chain{stage(Fir{taps})};
        INFO("design " << design);
        CHECK(impulse_response(chain, taps.size()) == taps);
        if (design != "F") {
            CHECK_THAT(gain(chain, 0.0), Catch::WithinAbs(1.0, 1e-14));  // scaled to unit DC gain
        }
        CHECK_THAT(l1_norm(chain), Catch::WithinRel(
                                       [&] {
                                           double sum = 0.0;
                                           for (const double tap : taps) sum += std::fabs(tap);
                                           return sum;
                                       }(),
                                       1e-14));
    }
    // Design B, 11 taps (COMPUTED): the printed taps.
    const auto b = windowed_sinc(table, "B");
    const double printed[] = {
        0.0, -0.012641975736843, -0.024692257708770, 0.063505129946037, 0.274797751173244, 0.398062704652663};
    for (std::size_t k = 0; k < 6; ++k) {
        CHECK_THAT(b[k], Catch::WithinAbs(printed[k], 1e-15));
        CHECK(b[k] == b[10 - k]);
    }
}

TEST_CASE("published: 101 taps under four windows reach the stop band and -6 dB of the tables (MEMORY, COMPUTED)",
          "[filters][published]") {
    const CsvTable table("fir-window-performance.csv");
    struct Row {
        const char* window;
        double a0, a1, a2, book_db;
    };
    // The book's figures, tolerance 1.5 dB as the source advises.
    for (const Row& w : {Row{"boxcar", 1, 0, 0, -21}, Row{"hann", 0.5, 0.5, 0, -44}, Row{"hamming", 0.54, 0.46, 0, -53},
                         Row{"blackman", 0.42, 0.5, 0.08, -74}}) {
        std::vector<double> taps(101);
        double sum = 0.0;
        for (int i = 0; i <= 100; ++i) {
            const double pi = 3.14159265358979323846, x = i - 50.0, turn = 2.0 * pi * i / 100.0;
            const double sinc = i == 50 ? 0.4 : std::sin(2.0 * pi * 0.2 * x) / (pi * x);
            sum += taps[static_cast<std::size_t>(i)] =
                sinc * (w.a0 - w.a1 * std::cos(turn) + w.a2 * std::cos(2.0 * turn));
        }
        for (double& tap : taps) tap /= sum;
        const FilterChain chain{stage(Fir{taps})};
        for (std::size_t row = 0; row < table.rows(); ++row) {
            if (table.text(row, "window") != w.window) continue;
            INFO(w.window);
            // The stop band begins where the response first falls to its largest later value.
            double peak = 0.0, before = 0.0, here = gain(chain, 0.5);
            for (int i = 5000; i-- > 2000;) {
                const double next = gain(chain, i * 1e-4);
                if (here >= before && here > next) peak = std::max(peak, here);
                before = here;
                here = next;
            }
            // Lobes are 0.01 wide: half a step of 1e-4 beside the peak, 1 - (pi / 200)^2 / 2 of it is left, 0.001 dB.
            CHECK_THAT(db(peak), Catch::WithinAbs(table.number(row, "stopband [dB]"), 0.01));
            CHECK_THAT(db(peak), Catch::WithinAbs(w.book_db, 1.5));
            // The table took the nearest point of a grid of 2^-19, not 0.2 itself.
            CHECK_THAT(gain(chain, 104858.0 / 524288.0),
                       Catch::WithinAbs(table.number(row, "magnitude at cutoff [1]"), 1e-12));
        }
    }
}

TEST_CASE("published: Audio EQ Cookbook biquads at DC, f0 and half the rate (SEEN formulas, COMPUTED)",
          "[filters][published]") {
    const CsvTable table("rbj-biquads.csv");
    REQUIRE(table.rows() == 36);
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const auto c = [&](const char* name) { return table.number(row, name); };
        REQUIRE(c("a0") == 1.0);
        const BiquadSection section{c("b0"), c("b1"), c("b2"), c("a1"), c("a2")};
        const FilterChain chain{stage(BiquadCascade{{section}})};
        const std::string type = table.text(row, "filter");
        const double f0 = c("f0 [Hz]") / c("Fs [Hz]"), q = c("Q ["), at_f0 = gain(chain, f0);
        INFO(type << " row " << row);
        CHECK(is_stable(section));
        // The printed gains come from an evaluation that loses 2^-52 / |A|, up to 1e-13 at f0 = Fs / 480.
        CHECK_THAT(gain(chain, 0.0), Catch::WithinAbs(c("|H| at DC"), 1e-12));
        CHECK_THAT(at_f0, Catch::WithinAbs(c("|H| at f0 [1]"), 1e-12));
        CHECK_THAT(gain(chain, 0.5), Catch::WithinAbs(c("|H| at Fs/2"), 1e-12));
        // Exact properties of the formulas.
        if (type == "LPF" || type == "HPF" || type.rfind("BPF skirt", 0) == 0) {
            CHECK_THAT(at_f0, Catch::WithinRel(q, 1e-11));
        }
        if (type == "BPF 0 dB peak") CHECK_THAT(at_f0, Catch::WithinAbs(1.0, 1e-11));
        if (type == "notch") CHECK(at_f0 < 1e-11);
        if (type == "APF") {
            for (const double f : {0.0, 0.01, f0, 0.2, 0.5}) CHECK_THAT(gain(chain, f), Catch::WithinAbs(1.0, 1e-12));
        }
        if (type == "peakingEQ") CHECK_THAT(db(at_f0), Catch::WithinAbs(c("gain [dB]"), 1e-9));
        if (type == "lowShelf" || type == "highShelf")
            CHECK_THAT(db(at_f0), Catch::WithinAbs(c("gain [dB]") / 2.0, 1e-9));
    }
}

TEST_CASE("published: Butterworth sections are maximally flat with -3.01 dB at Wn (COMPUTED, two rows OCTAVE)",
          "[filters][published]") {
    const CsvTable table("butterworth-digital.csv");
    std::size_t designs = 0;
    for (std::size_t row = 0; row < table.rows();) {
        const std::string order = table.text(row, "design order"), wn = table.text(row, "Wn"),
                          type = table.text(row, "type");
        BiquadCascade cascade;
        for (; row < table.rows() && table.text(row, "design order") == order && table.text(row, "Wn") == wn &&
               table.text(row, "type") == type;
             ++row) {
            const auto c = [&](const char* name) { return table.number(row, name); };
            REQUIRE(c("a0") == 1.0);
            cascade.sections.push_back({c("b0"), c("b1"), c("b2"), c("a1"), c("a2")});
            CHECK(is_stable(cascade.sections.back()));
        }
        ++designs;
        const FilterChain chain{stage(cascade)};
        INFO("order " << order << ", Wn " << wn << ", " << type);
        if (type != "low" && type != "high") {
            // Both edges of "(0.2, 0.4)" at -3.01 dB, half the rate and DC blocked or passed.
            CHECK_THAT(gain(chain, 0.1), Catch::WithinAbs(std::sqrt(0.5), 1e-11));
            CHECK_THAT(gain(chain, 0.2), Catch::WithinAbs(std::sqrt(0.5), 1e-11));
            CHECK_THAT(gain(chain, 0.0), Catch::WithinAbs(type == "band" ? 0.0 : 1.0, 1e-11));
            CHECK_THAT(gain(chain, 0.5), Catch::WithinAbs(type == "band" ? 0.0 : 1.0, 1e-11));
            continue;
        }
        const double corner = std::stod(wn), pi = 3.14159265358979323846;
        for (const double f : {0.0, 0.2 * corner, 0.5 * corner, 0.3, 0.45}) {
            // |H|^2 = 1 / (1 + (tan(pi f) / tan(pi Wn / 2))^(+-2N)), the bilinear transform of the definition.
            const double ratio = std::tan(pi * f) / std::tan(pi * corner / 2.0), n = std::stod(order);
            const double power = std::pow(ratio, 2.0 * n);
            const double expected = type == "low" ? 1.0 / std::sqrt(1.0 + power) : std::sqrt(power / (1.0 + power));
            CHECK_THAT(gain(chain, f), Catch::WithinAbs(expected, 1e-11));
        }
        CHECK_THAT(gain(chain, corner / 2.0), Catch::WithinAbs(std::sqrt(0.5), 1e-11));
    }
    CHECK(designs == 10);
}

TEST_CASE("published: sums of squares and L1 norms (COMPUTED, two rows OCTAVE)", "[filters][published]") {
    const CsvTable table("roundoff-noise-and-norms.csv");
    std::size_t checked = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const auto list = [&](const char* head) {
            std::istringstream text(table.text(row, head));
            std::vector<double> numbers;
            for (double number = 0.0; text >> number;) numbers.push_back(number);
            return numbers;
        };
        auto b = list("numerator"), a = list("denominator");
        FilterChain chain;
        if (a.size() == 1) {
            chain.push_back(stage(Fir{b}));
        } else if (a.size() <= 3 && b.size() <= 3) {
            a.resize(3);
            b.resize(3);
            chain.push_back(stage(BiquadCascade{{{b[0], b[1], b[2], a[1], a[2]}}}));
        } else {
            continue;  // a fourth-order polynomial, not in sections
        }
        INFO(table.text(row, "filter") << ' ' << table.text(row, "parameters"));
        double squares = 0.0;
        for (const double h : impulse_response(chain, 8000)) squares += h * h;
        CHECK_THAT(squares, Catch::WithinRel(table.number(row, "sum h^2"), 1e-11));
        CHECK_THAT(l1_norm(chain), Catch::WithinRel(table.number(row, "L1 norm"), 1e-11));
        ++checked;
    }
    CHECK(checked == table.rows() - 1);
}
