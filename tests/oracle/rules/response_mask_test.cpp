// Masks against the published tables they come from, and what a plan may not say of them.
#include <catch2/catch.hpp>
#include <cmath>

#include "oracle/rules/rule.hpp"
#include "oracle/rules/standard_masks.hpp"
#include "oracle/rules/weighting_curves.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {

ResponseMask mask_of(std::string_view name, const StandardMaskWords& words = {}) {
    auto made = standard_mask(name, words);
    REQUIRE(made);
    return *made;
}

std::string refused(const ParameterValues& given, double rate_hz = 48000.0) {
    const auto made = make_rule("response", given, {rate_hz, true, 32768.0, {}});
    REQUIRE_FALSE(made);
    return to_text(made.error());
}

}  // namespace

TEST_CASE("mask: the nominal weightings are the published ones", "[judge]") {
    // IEC 61672-1:2013, table 3, design goals, rounded to 0.1 dB, at 1000 * 10^(n / 10) Hz (public transcriptions).
    struct Goal {
        int n;
        double a, c;
    };
    const Goal goals[] = {{-20, -70.4, -14.3}, {-15, -39.4, -3.0}, {-10, -19.1, -0.3}, {-5, -6.6, 0.0},
                          {0, 0.0, 0.0},       {4, 1.3, -0.3},     {7, 0.5, -1.3},     {9, -1.1, -3.0},
                          {10, -2.5, -4.4},    {13, -9.3, -11.2}};
    for (const Goal& goal : goals) {
        const double hz = 1000.0 * std::pow(10.0, goal.n / 10.0);
        INFO(hz << " Hz");
        CHECK(std::fabs(nominal_db(NominalCurve::a_weighting, hz) - goal.a) <= 0.0501);
        CHECK(std::fabs(nominal_db(NominalCurve::c_weighting, hz) - goal.c) <= 0.0501);
    }
    // Evaluated by GNU Octave at these frequencies, to 1e-6.
    CHECK(nominal_db(NominalCurve::a_weighting, 100.0) == Approx(-19.142777).margin(1e-6));
    CHECK(nominal_db(NominalCurve::a_weighting, std::pow(10.0, 3.9)) == Approx(-1.110658).margin(1e-6));
    CHECK(nominal_db(NominalCurve::a_weighting, std::pow(10.0, 4.3)) == Approx(-9.316925).margin(1e-6));
    CHECK(nominal_db(NominalCurve::c_weighting, std::pow(10.0, 1.5)) == Approx(-10.0 * std::log10(2.0)).margin(1e-9));
    // The gain table of the BS.1770 sections, from SciPy and Octave.
    CHECK(nominal_db(NominalCurve::k_weighting, 997.0) == Approx(0.691014095).margin(1e-8));
    CHECK(nominal_db(NominalCurve::k_weighting, 10.0) == Approx(-23.786163556).margin(1e-6));
    CHECK(nominal_db(NominalCurve::k_weighting, 20000.0) == Approx(4.043114184).margin(1e-8));
}

TEST_CASE("mask: A weighting has its table's limits there and the wider ones between", "[judge]") {
    const ResponseMask mask = mask_of("a-weighting class 1");
    CHECK(mask.limits_at(1000.0).max_db == Approx(0.7));
    CHECK(mask.limits_at(1000.0).min_db == Approx(-0.7));
    const double between_hz = 1100.0, goal = nominal_db(NominalCurve::a_weighting, between_hz);
    CHECK(mask.limits_at(between_hz).max_db == Approx(goal + 1.0));
    CHECK(mask.limits_at(between_hz).min_db == Approx(goal - 1.0));
    CHECK(std::isinf(mask.limits_at(10.0).min_db));
    CHECK(mask.limits_at(10.0).max_db == Approx(nominal_db(NominalCurve::a_weighting, 10.0) + 3.0));
    CHECK(std::isinf(mask.limits_at(9.0).max_db));
    const ResponseMask second = mask_of("c-weighting class 2");
    CHECK(second.limits_at(1000.0).max_db == Approx(1.0));
    CHECK(std::isinf(second.limits_at(10000.0).min_db));
    CHECK(mask.source == "IEC 61672-1:2013, table 3, class 1, with 0 dB at 1000 Hz");
    // A plan may refer to another frequency, and another gain there.
    const ResponseMask moved = mask_of("a-weighting class 1", {{}, {}, 100.0, -6.0});
    CHECK(moved.limits_at(100.0).max_db == Approx(-6.0 + 1.0));
    CHECK(moved.limits_at(1000.0).max_db == Approx(19.142777 - 6.0 + 0.7).margin(1e-5));
}

TEST_CASE("mask: band filters have the printed breakpoints and straight lines between", "[judge]") {
    const ResponseMask octave = mask_of("octave class 1", {1000.0, {}, {}, {}});
    const double edge = std::pow(10.0, 0.15);
    for (const double omega : {edge * (1.0 - 1e-6), (1.0 + 1e-6) / edge}) {
        CHECK(octave.limits_at(1000.0 * omega).min_db == Approx(-5.3).margin(1e-3));
        CHECK(octave.limits_at(1000.0 * omega).max_db == Approx(0.4).margin(1e-9));
    }
    for (const double omega : {edge * (1.0 + 1e-6), (1.0 - 1e-6) / edge}) {
        CHECK(std::isinf(octave.limits_at(1000.0 * omega).min_db));
        CHECK(octave.limits_at(1000.0 * omega).max_db == Approx(-1.2).margin(1e-3));
    }
    // The edge itself belongs to both: the wider of each limit.
    CHECK(std::isinf(octave.limits_at(1000.0 * edge).min_db));
    CHECK(octave.limits_at(1000.0 * edge).max_db == Approx(0.4));
    CHECK(octave.limits_at(1000.0).min_db == Approx(-0.4));
    // Half way in lg f between G^1 and G^2.
    CHECK(octave.limits_at(1000.0 * std::pow(10.0, 0.45)).max_db == Approx(-(16.6 + 40.5) / 2.0));
    CHECK(octave.limits_at(0.0).max_db == -70.0);
    CHECK(octave.limits_at(20000.0).max_db == -70.0);
    // IEC 61260-1:2014, table F.1, as it is printed (public transcriptions), to 5 decimals.
    const ResponseMask third = mask_of("third-octave class 2", {1.0, {}, {}, -3.0});
    const double printed[] = {1.0, 1.02667, 1.05575, 1.08746, 1.12202, 1.12202, 1.29437, 1.88173, 3.05365, 5.39195};
    REQUIRE(third.corners.size() == 19);
    for (std::size_t i = 0; i < 10; ++i) {
        CHECK(third.corners[9 + i].hz == Approx(printed[i]).margin(5.1e-6));
        CHECK(third.corners[9 - i].hz == Approx(1.0 / printed[i]).margin(5.1e-6));
    }
    CHECK(third.limits_at(1.0).max_db == Approx(-3.0 + 0.6));
}

TEST_CASE("mask: words that a standard does not know are refused by their name", "[judge]") {
    using Given = ParameterValues;
    const auto with = [](std::vector<std::pair<std::string, ParameterValue>> list) -> Given { return values(list); };
    const std::string a = "a-weighting class 1";
    CHECK(
        refused(with({{"mask", std::string("octave class 1")}})).starts_with("mask: mask = \"octave class 1\" has no"));
    CHECK(refused(with({{"mask", a}, {"mid_hz", 100.0}})).starts_with("mid_hz: "));
    CHECK(refused(with({{"mask", a}, {"tolerance_db", 1.0}})).starts_with("tolerance_db: "));
    CHECK(refused(with({{"mask", std::string("k-weighting")}})).starts_with("mask: "));
    CHECK(refused(with({{"mask", a}, {"relative_to", std::string("design")}})).starts_with("relative_to: "));
    CHECK(refused(with({{"mid_hz", 100.0}})).starts_with("mid_hz: mid_hz belongs to the mask of a standard"));
    CHECK(refused(with({{"mask", a}}), 16.0).starts_with("mask: the mask begins at 10 Hz"));
    CHECK(refused({}).starts_with("bands: a response rule without limits judges nothing"));
    CHECK(make_rule("response", with({{"mask", a}}), {48000.0, true, 32768.0, {}}));
}

TEST_CASE("phase: limits that cross, idle words and ranges are refused by their name", "[judge]") {
    const auto with = [](std::vector<std::pair<std::string, ParameterValue>> list) { return values(list); };
    CHECK(refused(with({{"min_group_delay_samples", 1.0}})).starts_with("min_group_delay_samples: "));
    CHECK(refused(with({{"min_group_delay_samples", 2.0},
                        {"max_group_delay_samples", 1.0},
                        {"phase_relative_to", std::string("absolute")}}))
              .starts_with("min_group_delay_samples: the limits cross"));
    CHECK(refused(with({{"max_group_delay_samples", 0.0}})).starts_with("max_group_delay_samples: "));
    CHECK(refused(with({{"max_phase_deg", 1.0}, {"phase_from_hz", 1.0}})).starts_with("phase_from_hz: "));
    CHECK(refused(with({{"max_phase_deg", 1.0}, {"phase_from_hz", 9.0}, {"phase_to_hz", 1.0}}))
              .starts_with("phase_from_hz: the range of the phase runs backwards"));
    CHECK(refused(with({{"max_phase_deg", 1.0}, {"phase_from_hz", 9.0}, {"phase_to_hz", 24001.0}}))
              .starts_with("phase_to_hz: phase_to_hz = 24001 is above Nyquist, 24000 Hz"));
    CHECK(refused(with({{"max_phase_deg", 1.0}, {"phase_from_hz", 9.0}, {"phase_to_hz", 20.0}, {"passband_db", 1.0}}))
              .starts_with("passband_db: "));
    CHECK(refused(with({{"delta_deg", 1.0}})).starts_with("delta_deg: "));
}
