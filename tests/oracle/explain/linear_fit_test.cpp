// The linear filter that a board really is, from what it returns; and boards whose tables hold other numbers than
// declared.
#include "oracle/explain/linear_fit.hpp"

#include <catch2/catch.hpp>
#include <cmath>

#include "oracle/explain/finding.hpp"
#include "oracle/explain/probes.hpp"
#include "tests/oracle/explain/small_boards.hpp"
#include "tests/oracle/explain/small_plans.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

/// An output that is rounded has an error of 1/sqrt(12) LSB rms; what limits it at a rail is not looked at.
const double rounding_rms_lsb = 1.0 / std::sqrt(12.0);

FilterStage declared_fir() { return declared(Fir{slanted}, "fir", 15); }
FilterStage declared_biquad() {
    const auto& c = low_pass;
    return declared(BiquadCascade{{{c[0], c[1], c[2], c[3], c[4]}}}, "biquad-cascade", 14);
}

CaptureSet captures_of(SmallBoard& board, Wrong wrong = Wrong::nothing) {
    std::vector<ChannelCapture> captures;
    for (const Probe& probe : probes_for(q15_signal(), 0.9)) {
        ChannelCapture capture;
        capture.case_name = probe.what;
        capture.sent = probe.codes;
        capture.response = returned_by(board, probe.codes, wrong);
        captures.push_back(std::move(capture));
    }
    return CaptureSet(q15_signal(), std::move(captures));
}

std::string cause_of(const FilterStage& stage, SmallBoard& board) {
    CaptureSet captures = captures_of(board);
    const Finding finding = find_cause({{stage}}, captures, [] { return true; });
    return finding.kind == FindingKind::found ? finding.search.classes.front().members.front().hypothesis.what()
                                              : std::string(name_of(finding.kind));
}

}  // namespace

TEST_CASE("explain: taps are told by least squares to within their rounding", "[explain]") {
    SmallFir board(slanted, Wrong::nothing);
    const auto fit = fit_linear(captures_of(board), slanted.size() + 3, 0);
    REQUIRE(fit);
    // Rounding errors of the output through the inverse of the input's power, 5 sigma: noise at 0.9 FS is most of it.
    const double input_rms_lsb = 0.9 * 32768.0 / std::sqrt(3.0);
    const double tolerance = 5.0 * rounding_rms_lsb / (input_rms_lsb * std::sqrt(4096.0)) + 0.5 / 32768.0;
    for (std::size_t k = 0; k < fit->b.size(); ++k)
        CHECK(fit->b[k] == Approx(k < slanted.size() ? slanted[k] : 0.0).margin(tolerance));
    CHECK(fit->residual_lsb == Approx(rounding_rms_lsb).epsilon(0.05));
    CHECK(std::abs(fit->offset_lsb) < 0.05);
    CHECK(fit->a == std::vector<double>{1.0});
}

TEST_CASE("explain: truncation is an offset of half a step and no other taps", "[explain]") {
    SmallFir board(slanted, Wrong::floor);
    const auto fit = fit_linear(captures_of(board), slanted.size(), 0);
    REQUIRE(fit);
    CHECK(fit->offset_lsb == Approx(-0.5).margin(0.05));
    CHECK(fit->residual_lsb == Approx(rounding_rms_lsb).epsilon(0.05));
}

TEST_CASE("explain: a recursion that rounds its sum once is told without bias", "[explain]") {
    SmallBiquad board(low_pass, Wrong::nothing);
    const auto fit = fit_linear(captures_of(board), 3, 2);
    REQUIRE(fit);
    // Within the half step of the 14 bits that the firmware stores, and as much for the noise.
    for (std::size_t k = 0; k < 3; ++k) CHECK(fit->b[k] == Approx(low_pass[k]).margin(1.0 / 16384.0));
    for (std::size_t k = 0; k < 2; ++k) CHECK(fit->a[k + 1] == Approx(low_pass[k + 3]).margin(1.0 / 16384.0));
    CHECK(fit->residual_lsb == Approx(rounding_rms_lsb).epsilon(0.1));
}

TEST_CASE("explain: what is not linear leaves more than a rounding", "[explain]") {
    SmallFir board(slanted, Wrong::nothing);
    const auto fit = fit_linear(captures_of(board, Wrong::looked_up), slanted.size(), 0);
    REQUIRE(fit);
    CHECK(fit->residual_lsb > 10.0);
}

TEST_CASE("explain: silence tells no taps", "[explain]") {
    ChannelCapture silence;
    silence.sent.assign(4096, 0);
    silence.response.assign(4096, 0);
    CHECK_FALSE(fit_linear(CaptureSet(q15_signal(), {silence}), 9, 0));
    CHECK_FALSE(fit_linear(CaptureSet(q15_signal(), {}), 9, 0));
}

TEST_CASE("explain: a table with other numbers in it is read from what the board returns", "[explain]") {
    std::vector<double> taps = slanted;
    taps[1] = -0.048;
    taps[4] = 0.40625;
    taps[7] = 0.0312;
    SmallFir fir(taps, Wrong::nothing);
    const std::string cause = cause_of(declared_fir(), fir);
    CHECK(cause ==
          "h1 = -1573 in place of -1638, h4 = 13312 in place of 13107, h7 = 1022 in place of 983, in steps of 2^-15");
    taps.push_back(0.125);
    SmallFir longer(taps, Wrong::nothing);
    CHECK(cause_of(declared_fir(), longer).find("h9 = 4096 in place of 0") != std::string::npos);

    std::array<double, 5> other = low_pass;
    other[1] = 0.0075;
    other[4] = 0.8379;
    SmallBiquad biquad(other, Wrong::nothing);
    CHECK(cause_of(declared_biquad(), biquad) ==
          "b1 = 123 in place of 119, a2 = 13728 in place of 13716, in steps of 2^-14");
}

TEST_CASE("explain: of a board that nobody knows the nearest linear filter is told", "[explain]") {
    SmallFir board(slanted, Wrong::nothing);
    CaptureSet captures = captures_of(board, Wrong::looked_up);
    const Finding finding = find_cause({{declared_fir()}}, captures, [] { return true; });
    CHECK(finding.kind == FindingKind::unknown);
    REQUIRE(finding.linear);
    CHECK(finding.linear->b.size() == slanted.size());
}

TEST_CASE("explain: the order of a chain is that of its direct form", "[explain]") {
    const auto order = linear_order({declared_fir(), declared_biquad()});
    REQUIRE(order);
    CHECK(order->feed_forward == 11);
    CHECK(order->feedback == 2);
    FilterStage median;
    median.design = Median{5};
    CHECK_FALSE(linear_order({median}));
    CHECK_FALSE(linear_order({declared(Fir{std::vector<double>(161, 0.001)}, "fir", 15)}));
}
