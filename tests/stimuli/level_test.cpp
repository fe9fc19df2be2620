#include "make.hpp"

using namespace halflsb;

TEST_CASE("level: in the unit, of either sign, and at most one of the three", "[stimuli]") {
    const std::int64_t ten = 10;
    const auto level = [](double level_unit, double full_scale_unit) {
        return ratios_of(*made("step", {{"length_samples", std::int64_t{1}}, {"level_unit", level_unit}}, 1200.0, "q15",
                               full_scale_unit),
                         0, 1)[0];
    };
    CHECK(level(1500.0, 6000.0) == 0.25);
    CHECK(level(-6000.0, 6000.0) == -1.0);
    CHECK(level(1500.0, -6000.0) == -0.25);
    const auto refused = [&](Given given) { return refusal("step", given, 1200.0, "q15", 6000.0); };
    CHECK(refused({{"length_samples", ten}, {"level_unit", 6000.0}}) == "accepted");
    CHECK(refused({{"length_samples", ten}, {"level_unit", -6000.1}}) ==
          "level_unit: -6000.1 is beyond full scale, 6000\n  give at most 6000 in size");
    CHECK(refused({{"length_samples", ten}, {"level_unit", 5.0}, {"level_ratio", 0.5}}) ==
          "level_unit: level_ratio is given too\n  keep one of the two");
    CHECK(refused({{"length_samples", ten}, {"level_unit", 5.0}, {"level_codes", ten}}) ==
          "level_unit: level_codes is given too\n  keep one of the two");
    CHECK(refusal("step", {{"length_samples", ten}, {"level_unit", 5.0}}) ==
          "level_unit: nothing says what full scale of the input means in a unit\n"
          "  say so in [signal], or give level_ratio instead");
    CHECK(refusal("noise", {{"length_samples", ten}, {"level_unit", 0.0}}, 1200.0, "q15", 6000.0) ==
          "level_unit: 0 unit is not above 0 unit\n  give more than 0");
    CHECK(refusal("step", {{"length_samples", ten}, {"level_codes", std::int64_t{2048}}}, 1200.0, "u12") ==
          "level_codes: 2048 is no distance from the mid-code of u12\n  give a whole number from -2048 to 2047");
}
