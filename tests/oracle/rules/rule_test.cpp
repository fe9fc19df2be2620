#include "oracle/rules/rule.hpp"

#include <catch2/catch.hpp>

#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {

const RuleContext q15{1200.0, true, 32768.0, 6000.0};

Error refused(const std::string& kind, const ParameterValues& given, const RuleContext& context = q15) {
    const auto made = make_rule(kind, given, context);
    REQUIRE_FALSE(made);
    return made.error();
}

using Rows = std::vector<std::vector<double>>;
constexpr double none = no_limit;

}  // namespace

TEST_CASE("rule: error limits are read in LSB, fraction of full scale and engineering units", "[judge]") {
    const auto made = make_rule(
        "error", values({{"max_lsb", 0.5}, {"rms_ratio", 1e-5}, {"bias_unit", 0.1}, {"min_snr_db", 60.0}}), q15);
    REQUIRE(made);
    const auto& rule = std::get<ErrorRule>(made->kind);
    CHECK(*rule.largest == Limit{0.5, Limit::In::lsb});
    CHECK(*rule.rms == Limit{1e-5, Limit::In::full_scale_ratio});
    CHECK(*rule.bias == Limit{0.1, Limit::In::unit});
    CHECK(*rule.min_snr_db == 60.0);
    CHECK(kind_name(*made) == "error");
}

TEST_CASE("rule: an error rule without a limit is refused", "[judge]") {
    const Error error = refused("error", {});
    CHECK(to_text(error) ==
          "kind: a rule of kind \"error\" without a limit judges nothing\n  give at least one of max_lsb, rms_lsb, "
          "bias_lsb (or "
          "_ratio, _unit) and min_snr_db");
}

TEST_CASE("rule: a limit wider than full scale is refused, full scale itself is not", "[judge]") {
    CHECK(make_rule("error", values({{"max_lsb", 32768.0}}), q15));
    CHECK(to_text(refused("error", values({{"max_lsb", 32769.0}}))) ==
          "max_lsb: 32769 is wider than full scale (32768)\n  a limit that wide judges nothing; give the error that "
          "the design allows");
    CHECK(refused("error", values({{"rms_ratio", 1.001}})).place == "rms_ratio");
    CHECK(refused("error", values({{"max_unit", 6000.5}})).place == "max_unit");
}

TEST_CASE("rule: a limit given twice, or in a unit that has no meaning, is refused", "[judge]") {
    CHECK(to_text(refused("error", values({{"max_lsb", 1.0}, {"max_ratio", 0.1}}))) ==
          "max_ratio: the same limit is given twice, as max_lsb and as max_ratio\n  keep one of the two");
    const RuleContext f32{1200.0, false, 0.0, std::nullopt};
    CHECK(to_text(refused("error", values({{"bias_lsb", 1.0}}), f32)) ==
          "bias_lsb: an f32 output has no LSB\n  use bias_ratio or bias_unit");
    CHECK(to_text(refused("error", values({{"max_unit", 1.0}}), f32)) ==
          "max_unit: nothing says what full scale is worth in the unit\n  set full_scale_unit in [signal], or use "
          "max_ratio");
}

TEST_CASE("rule: bands must run forwards, stay below Nyquist and not cross", "[judge]") {
    const auto made =
        make_rule("response", values({{"bands", Rows{{0.0, 600.0, -1.0, none}, {10.0, 10.0, -none, 3.0}}}}), q15);
    REQUIRE(made);
    const auto& bands = std::get<ResponseRule>(made->kind).bands;
    REQUIRE(bands.size() == 2);
    CHECK(*bands[0].min_db == -1.0);
    CHECK_FALSE(bands[0].max_db);
    CHECK(*bands[1].max_db == 3.0);

    CHECK(to_text(refused("response", values({{"bands", Rows{{20.0, 10.0, -1.0, 1.0}}}}))) ==
          "bands: the band 20 to 10 Hz runs backwards\n  from_hz must be at least 0 and at most to_hz");
    CHECK(to_text(refused("response", values({{"bands", Rows{{10.0, 600.5, -1.0, 1.0}}}}))) ==
          "bands: the band 10 to 600.5 Hz ends above Nyquist (600 Hz)\n  end it at 600 Hz or below");
    CHECK(to_text(refused("response", values({{"bands", Rows{{10.0, 20.0, 1.0, -1.0}}}}))) ==
          "bands: the limits of the band 10 to 20 Hz cross: min_db 1 is above max_db -1\n  exchange them");
    CHECK(to_text(refused("response", values({{"bands", Rows{{10.0, 20.0, -none, none}}}}))) ==
          "bands: the band 10 to 20 Hz has no limit\n  give min_db, max_db or both");
    CHECK(refused("response", {}).place == "bands");
}

TEST_CASE("rule: an unknown kind names those there are", "[judge]") {
    const std::string text = to_text(refused("speed", {}));
    CHECK_THAT(text, Catch::Matchers::StartsWith("kind: there is no rule \"speed\"\n  use error, latency, "));
    CHECK_THAT(text, Catch::Matchers::EndsWith(" or " + std::string(rule_recipes().back().name)));
    for (const Recipe& recipe : rule_recipes()) CHECK_THAT(text, Catch::Matchers::Contains(std::string(recipe.name)));
}

TEST_CASE("rule: a tone rule needs a limit, and knows its frequency unless it is asked to fit it", "[judge]") {
    const auto made = make_rule("tone", values({{"min_sinad_db", 60.0}, {"frequency", std::string("fitted")}}), q15);
    REQUIRE(made);
    const auto& rule = std::get<ToneRule>(made->kind);
    CHECK(*rule.min_sinad_db == 60.0);
    CHECK(rule.highest_harmonic == 10);
    CHECK(rule.fits_frequency);
    CHECK_FALSE(std::get<ToneRule>(make_rule("tone", values({{"max_thd_db", -60.0}}), q15)->kind).fits_frequency);
    CHECK(to_text(refused("tone", values({{"highest_harmonic", std::int64_t{5}}}))) ==
          "kind: a rule of kind \"tone\" without a limit judges nothing\n  give at least one of min_sinad_db, "
          "min_enob_bits, max_thd_db and min_sfdr_db");
}

TEST_CASE("rule: a transition rule needs a limit, and one direction", "[judge]") {
    const auto made = make_rule("transition", values({{"max_fall_samples", 5.0}, {"final_unit", 2.0}}), q15);
    REQUIRE(made);
    const auto& rule = std::get<TransitionRule>(made->kind);
    CHECK(*rule.max_fall_samples == 5.0);
    CHECK(*rule.final_value == Limit{2.0, Limit::In::unit});
    CHECK((rule.low_percent == 10.0 && rule.high_percent == 90.0 && rule.band_percent == 2.0));
    CHECK(refused("transition", values({{"band_percent", 1.0}})).place == "kind");
    CHECK(to_text(refused("transition", values({{"max_rise_samples", 5.0}, {"max_fall_samples", 5.0}}))) ==
          "max_fall_samples: max_rise_samples is given too, and a step goes one way\n  keep the one that fits the "
          "stimulus");
}
