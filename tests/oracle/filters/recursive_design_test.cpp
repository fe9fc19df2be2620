#include "oracle/filters/recursive_design.hpp"

#include "oracle/filters/section_loss.hpp"
#include "oracle/filters/stability.hpp"
#include "tests/oracle/filters/make.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

constexpr double pi = 3.14159265358979323846;

double gain(const std::vector<BiquadSection>& sections, double f) {
    return std::abs(response_at({stage(BiquadCascade{sections})}, f));
}

RecursiveDesign of(ResponseShape shape, int order, double lower, double upper = 0.0, double ripple_db = 0.0) {
    RecursiveDesign design;
    design.shape = shape;
    design.order = order;
    design.lower_hz = lower;
    design.upper_hz = upper;
    design.ripple_db = ripple_db;
    return design;
}

const ResponseShape every_shape[] = {ResponseShape::low_pass, ResponseShape::high_pass, ResponseShape::band_pass,
                                     ResponseShape::band_stop};

// The frequency of the low-pass prototype that lies at f: what |H|^2 = 1 / (1 + e^2 T_N^2) is asked for.
double prototype_frequency(const RecursiveDesign& design, double f) {
    const double w = std::tan(pi * f), low = std::tan(pi * design.lower_hz), high = std::tan(pi * design.upper_hz);
    switch (design.shape) {
        case ResponseShape::low_pass:
            return w / low;
        case ResponseShape::high_pass:
            return low / w;
        case ResponseShape::band_pass:
            return std::fabs((w * w - low * high) / (w * (high - low)));
        default:
            return std::fabs(w * (high - low) / (w * w - low * high));
    }
}

double defined_gain(const RecursiveDesign& design, double f) {
    const double x = prototype_frequency(design, f), n = design.order;
    if (design.ripple_db == 0.0) return 1.0 / std::sqrt(1.0 + std::pow(x, 2.0 * n));
    const double chebyshev = x <= 1.0 ? std::cos(n * std::acos(x)) : std::cosh(n * std::acosh(x));
    const double square = std::pow(10.0, 0.1 * design.ripple_db) - 1.0;
    return 1.0 / std::sqrt(1.0 + square * chebyshev * chebyshev);
}

}  // namespace

TEST_CASE("recursive design: the published Butterworth sections (COMPUTED, two rows OCTAVE)", "[filters][published]") {
    const CsvTable table("butterworth-digital.csv");
    std::size_t compared = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const std::string type = table.text(row, "type"), edges = table.text(row, "Wn");
        const int order = static_cast<int>(table.number(row, "design order"));
        RecursiveDesign design = of(ResponseShape::low_pass, order, 0.0);
        if (type == "high") design.shape = ResponseShape::high_pass;
        if (type == "band") design.shape = ResponseShape::band_pass;
        if (type == "bandstop") design.shape = ResponseShape::band_stop;
        if (type == "band" || type == "bandstop") {
            REQUIRE(edges == "(0.2, 0.4)");
            design.lower_hz = 0.1;
            design.upper_hz = 0.2;
        } else {
            design.lower_hz = 0.5 * std::stod(edges);
            if (order > 1 && order % 2 == 1) continue;  // our first-order section keeps its own zero: below
        }
        const auto sections = designed_sections(design);
        const auto c = [&](const char* name) { return table.number(row, name); };
        const BiquadSection& s = sections.at(static_cast<std::size_t>(c("section")) - 1);
        INFO("order " << order << ' ' << type << ' ' << edges << " section " << c("section"));
        // Each program rounds some ten times: 1e-15 of numbers up to 2.
        CHECK_THAT(s.b0, Catch::WithinRel(c("b0"), 1e-13));
        CHECK_THAT(s.b1, Catch::WithinAbs(c("b1"), 1e-13 * std::fabs(s.b0) + 1e-15));
        CHECK_THAT(s.b2, Catch::WithinAbs(c("b2"), 1e-13 * std::fabs(s.b0)));
        CHECK_THAT(s.a1, Catch::WithinAbs(c("a1"), 2e-15));
        CHECK_THAT(s.a2, Catch::WithinAbs(c("a2"), 2e-15));
        ++compared;
    }
    CHECK(compared == table.rows() - 2);
}

TEST_CASE("recursive design: the handbook's polynomials of first and third order (COMPUTED, OCTAVE)",
          "[filters][published]") {
    // N = 1, Wn = 0.1: b = K / (1 + K) twice, a = (K - 1) / (K + 1), K = tan(pi Wn / 2).
    const auto first = designed_sections(of(ResponseShape::low_pass, 1, 0.05)).at(0);
    CHECK_THAT(first.b0, Catch::WithinRel(0.13672873599731955, 2e-15));
    CHECK(first.b1 == first.b0);
    CHECK_THAT(first.a1, Catch::WithinRel(-0.726542528005361, 2e-15));
    CHECK((first.b2 == 0.0 && first.a2 == 0.0));
    // N = 3, Wn = 0.3, high-pass: the product of both sections.
    const auto s = designed_sections(of(ResponseShape::high_pass, 3, 0.15));
    REQUIRE(s.size() == 2);
    CHECK((s[0].b2 == 0.0 && s[0].a2 == 0.0));
    CHECK_THAT(s[0].b0 * s[1].b0, Catch::WithinAbs(0.374452692590160, 1e-15));
    CHECK_THAT(s[0].b0 * s[1].b1 + s[0].b1 * s[1].b0, Catch::WithinAbs(-1.123358077770479, 2e-15));
    CHECK_THAT(s[0].a1 + s[1].a1, Catch::WithinAbs(-1.161917483671732, 2e-15));
    CHECK_THAT(s[0].a1 * s[1].a1 + s[1].a2, Catch::WithinAbs(0.695942755789651, 2e-15));
    CHECK_THAT(s[0].a1 * s[1].a2, Catch::WithinAbs(-0.137761301259893, 2e-15));
}

TEST_CASE("recursive design: the gain is that of the definition, at every order and shape", "[filters]") {
    const std::uint64_t seed = 4711;
    INFO("seed " << seed);
    Random random(seed);
    for (const ResponseShape shape : every_shape) {
        for (int order = 1; order <= 12; ++order) {
            for (const double ripple_db : {0.0, 0.1, 3.0}) {
                const double lower = random.between(0.05, 0.2), upper = random.between(0.3, 0.45);
                const RecursiveDesign design = of(shape, order, lower, upper, ripple_db);
                const auto sections = designed_sections(design);
                INFO("shape " << static_cast<int>(shape) << ", order " << order << ", ripple " << ripple_db << ", "
                              << lower << " to " << upper);
                for (const BiquadSection& s : sections) CHECK(is_stable(s));
                for (const double f : {0.01, 0.07, 0.15, 0.22, 0.29, 0.36, 0.42, 0.49}) {
                    // Poles are 0.01 and more from the circle, a dozen pairs of them: 2^-53 / 0.01 each.
                    CHECK_THAT(gain(sections, f), Catch::WithinAbs(defined_gain(design, f), 1e-12));
                }
                const double at_corner = std::pow(10.0, -0.05 * (ripple_db > 0.0 ? ripple_db : 10.0 * std::log10(2.0)));
                CHECK_THAT(gain(sections, lower), Catch::WithinAbs(at_corner, 1e-12));
            }
        }
    }
}

TEST_CASE("recursive design: a low-pass passes a constant unchanged to the last digit, wherever its corner is",
          "[filters]") {
    for (const double corner : {1e-4, 1e-3, 0.01, 0.2, 0.49}) {
        for (const int order : {1, 2, 3, 4, 8}) {
            INFO("corner " << corner << ", order " << order);
            const auto low = designed_sections(of(ResponseShape::low_pass, order, corner));
            CHECK_THAT(gain(low, 0.0), Catch::WithinAbs(1.0, 4e-15));
            const auto high = designed_sections(of(ResponseShape::high_pass, order, corner));
            CHECK_THAT(gain(high, 0.5), Catch::WithinAbs(1.0, 4e-15));
        }
    }
}

TEST_CASE("recursive design: near the ends the response strays by no more than the stated loss", "[filters]") {
    std::size_t close = 0;
    for (const double corner : {2e-5, 1e-4, 1e-3}) {
        for (int order = 1; order <= 8; ++order) {
            const RecursiveDesign design = of(ResponseShape::low_pass, order, corner);
            const auto sections = designed_sections(design);
            const double loss = loss_of(sections);
            double worst = 0.0;
            for (double f = 0.1 * corner; f < 20.0 * corner; f *= 1.03) {
                worst = std::max(worst, std::fabs(gain(sections, f) / defined_gain(design, f) - 1.0));
            }
            INFO("corner " << corner << ", order " << order << ", loss " << loss << ", worst " << worst);
            // The gain's own correction doubles it at most; the definition takes 1e-14 of its own.
            CHECK(worst <= 2.0 * loss + 1e-13);
            if (worst > 0.02 * loss) ++close;
        }
    }
    CHECK(close > 12);  // and the bound is no phantom
}

TEST_CASE("recursive design: the poles nearest the circle come last, with the zeros nearest to them", "[filters]") {
    for (const ResponseShape shape : every_shape) {
        for (int order = 1; order <= 12; ++order) {
            const auto sections = designed_sections(of(shape, order, 0.05, 0.12));
            INFO("shape " << static_cast<int>(shape) << ", order " << order);
            const bool is_band = shape == ResponseShape::band_pass || shape == ResponseShape::band_stop;
            CHECK(sections.size() == static_cast<std::size_t>(is_band ? order : (order + 1) / 2));
            for (std::size_t i = 1; i < sections.size(); ++i) {
                CHECK(pole_radius(sections[i]) >= pole_radius(sections[i - 1]) - 1e-12);
                CHECK(sections[i].b0 == 1.0);
            }
        }
    }
    // Both ends of a band lie near z = 1: the poles nearest the circle take the zeros there, (1 - z^-1)^2.
    const auto pass = designed_sections(of(ResponseShape::band_pass, 4, 0.05, 0.12));
    CHECK((pass[3].b1 == -2.0 && pass[3].b2 == 1.0));
    CHECK((pass[2].b1 == -2.0 && pass[2].b2 == 1.0));
    CHECK((pass[1].b1 == 2.0 && pass[1].b2 == 1.0));
    CHECK(pass[0].b1 == 2.0 * pass[0].b0);
    // An odd number of them: one section has a zero at each end.
    const auto odd = designed_sections(of(ResponseShape::band_pass, 3, 0.05, 0.12));
    CHECK((odd[2].b1 == -2.0 && odd[1].b1 == 0.0 && odd[1].b2 == -1.0 && odd[0].b1 == 2.0 * odd[0].b0));
}

TEST_CASE("recursive design: low-pass and high-pass mirror each other at a quarter of the rate", "[filters]") {
    for (int order = 1; order <= 12; ++order) {
        const auto low = designed_sections(of(ResponseShape::low_pass, order, 0.1, 0.0, 1.0));
        const auto high = designed_sections(of(ResponseShape::high_pass, order, 0.4, 0.0, 1.0));
        for (std::size_t i = 0; i < low.size(); ++i) {
            CHECK_THAT(high[i].a1, Catch::WithinAbs(-low[i].a1, 1e-14));
            CHECK_THAT(high[i].a2, Catch::WithinAbs(low[i].a2, 1e-14));
        }
    }
}

TEST_CASE("recursive kinds: words, and what is refused", "[filters]") {
    const StageContext at_1000{.rate_hz = 1000.0};
    const auto given = [&](std::initializer_list<Given> list) { return refusal("butterworth", list, at_1000); };
    const std::string low = "low-pass", high = "high-pass", pass = "band-pass", stop = "band-stop";
    CHECK(given({{"response", low}, {"order", whole(12)}, {"corner_hz", 499.0}}) == "accepted");
    CHECK(given({{"response", low}, {"order", whole(4)}}) ==
          "corner_hz: corner_hz is missing\n  give corner_hz, the corner of a low-pass");
    CHECK(given({{"response", pass}, {"order", whole(4)}, {"from_hz", 10.0}}) ==
          "to_hz: to_hz is missing\n  give from_hz and to_hz, the corners of a band-pass");
    CHECK(given({{"response", pass}, {"order", whole(4)}, {"corner_hz", 10.0}}) ==
          "corner_hz: a band-pass has no corner_hz\n  give from_hz and to_hz instead, or another response");
    CHECK(given({{"response", high}, {"order", whole(4)}, {"corner_hz", 10.0}, {"to_hz", 20.0}}) ==
          "to_hz: a high-pass has no to_hz\n  give corner_hz instead, or another response");
    CHECK(given({{"response", low}, {"order", whole(4)}, {"corner_hz", 500.0}}) ==
          "corner_hz: 500 Hz is not below half the sample rate, 500 Hz\n  give less than 500 Hz");
    CHECK(given({{"response", stop}, {"order", whole(4)}, {"from_hz", 100.0}, {"to_hz", 500.0}}) ==
          "to_hz: 500 Hz is not below half the sample rate, 500 Hz\n  give less than 500 Hz");
    CHECK(given({{"response", stop}, {"order", whole(4)}, {"from_hz", 600.0}, {"to_hz", 700.0}}) ==
          "from_hz: 600 Hz is not below half the sample rate, 500 Hz\n  give less than 500 Hz");
    CHECK(given({{"response", pass}, {"order", whole(4)}, {"from_hz", 200.0}, {"to_hz", 200.0}}) ==
          "to_hz: the band goes from 200 Hz to 200 Hz\n  give more than 200 Hz, or exchange from_hz and to_hz");
    CHECK(given({{"response", low}, {"order", whole(13)}, {"corner_hz", 100.0}}) ==
          "order: 13 is above the largest, 12\n  give 12 or less");
    CHECK(given({{"response", low}, {"order", whole(0)}, {"corner_hz", 100.0}}) ==
          "order: 0 is below the least, 1\n  give 1 or more");
    CHECK(refusal("chebyshev", {{"response", low}, {"order", whole(4)}, {"corner_hz", 100.0}}, at_1000) ==
          "ripple_db: is missing, and \"chebyshev\" needs it\n  give a number");
    CHECK(
        given({{"response", low}, {"order", whole(2)}, {"corner_hz", 10.0}, {"coefficient_fraction_bits", whole(6)}}) ==
        "coefficient_fraction_bits: with 6 fraction bits section 1 passes nothing: b0 = 0, b1 = 0, b2 = 0\n"
        "  store the coefficients with 9 fraction bits or more");
}

TEST_CASE("recursive kinds: a design that double precision does not hold is refused, and the number given does",
          "[filters]") {
    const StageContext at_1000{.rate_hz = 1000.0};
    const auto given = [&](const char* response, int order, double lower, double upper = 0.0) {
        if (upper == 0.0) {
            return refusal("butterworth",
                           {{"response", std::string(response)}, {"order", whole(order)}, {"corner_hz", lower}},
                           at_1000);
        }
        return refusal(
            "butterworth",
            {{"response", std::string(response)}, {"order", whole(order)}, {"from_hz", lower}, {"to_hz", upper}},
            at_1000);
    };
    const std::string lost = " at 1000 samples a second can lose ", held = " in double precision\n  give ";
    CHECK(given("low-pass", 4, 0.001) ==
          "corner_hz: a corner of 0.001 Hz" + lost + "1e-05 of its gain" + held + "0.0131 Hz or more");
    CHECK(given("low-pass", 4, 0.0131) == "accepted");
    CHECK(given("low-pass", 2, 1e-7) ==
          "corner_hz: a corner of 1e-07 Hz at 1000 samples a second cannot be held" + held + "0.00842 Hz or more");
    CHECK(given("low-pass", 2, 0.00842) == "accepted");
    CHECK(given("high-pass", 4, 499.999) ==
          "corner_hz: a corner of 499.999 Hz" + lost + "1e-05 of its gain" + held + "499.9869 Hz or less");
    CHECK(given("high-pass", 4, 499.9869) == "accepted");
    CHECK(given("band-pass", 4, 0.1, 0.101) ==
          "to_hz: a band from 0.1 Hz to 0.101 Hz" + lost + "3.1e-07 of its gain" + held + "0.105254 Hz or more");
    CHECK(given("band-pass", 4, 0.1, 0.105254) == "accepted");
    CHECK(given("band-pass", 2, 1e-7, 400.0) ==
          "from_hz: a band from 1e-07 Hz to 400 Hz at 1000 samples a second cannot be held" + held +
              "0.00865181 Hz or more");
    CHECK(given("band-pass", 2, 0.00865181, 400.0) == "accepted");
    CHECK(given("band-pass", 12, 0.01, 499.999) ==
          "order: a band from 0.01 Hz to 499.999 Hz" + lost + "4e-05 of its gain" + held + "1 or less");
    CHECK(given("band-pass", 1, 0.01, 499.999) == "accepted");
    CHECK(given("band-pass", 2, 0.00002, 0.0001) == "from_hz: a band from 2e-05 Hz to 1e-04 Hz" + lost +
                                                        "0.0099 of its gain" + held +
                                                        "0.0084821 Hz and to_hz = 0.0424105 or more");
    CHECK(given("band-pass", 2, 0.0084821, 0.0424105) == "accepted");
    CHECK(given("band-pass", 12, 1e-8, 499.9999999) ==
          "from_hz: a band from 1e-08 Hz to 499.9999999 Hz at 1000 samples a second cannot be held" + held +
              "corners farther from 0 and from half the sample rate");
}
