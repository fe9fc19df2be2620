#include "make.hpp"

using namespace halflsb;

TEST_CASE("signs: one sample a sign, silence before and behind", "[stimuli]") {
    const auto signs = made("signs", {{"length_samples", std::int64_t{8}},
                                      {"at_samples", std::int64_t{2}},
                                      {"signs", std::string("+-0+")},
                                      {"level_ratio", 0.75}});
    CHECK(ratios_of(*signs, 0, 8) == std::vector<double>{0.0, 0.0, 0.75, -0.75, 0.0, 0.75, 0.0, 0.0});
    CHECK(ratios_of(*signs, 3, 3) == std::vector<double>{-0.75, 0.0, 0.75});
    CHECK(signs->spectrum().bands.empty());
    CHECK(signs->spectrum().tones.empty());
}

TEST_CASE("signs: it drives a moving sum to the sum of its taps' magnitudes", "[stimuli]") {
    // Taps 3, -2, 1: reversed signs + - +, so the last sample comes to 3 + 2 + 1 times the level.
    const auto signs = made("signs", {{"length_samples", std::int64_t{3}}, {"signs", std::string("+-+")}});
    const auto x = ratios_of(*signs, 0, 3);
    CHECK(3.0 * x[2] - 2.0 * x[1] + 1.0 * x[0] == 6.0 * 0.5);
}

TEST_CASE("signs: what is no sign and what does not fit is refused", "[stimuli]") {
    CHECK(refusal("signs", {{"length_samples", std::int64_t{8}}, {"signs", std::string("+-x")}}) ==
          "signs: character 3 is no sign\n  write +, - and 0 only, one for each sample: \"++-+0\"");
    CHECK(refusal("signs", {{"length_samples", std::int64_t{8}}, {"signs", std::string()}}) ==
          "signs: there is no sign\n  write +, - and 0 only, one for each sample: \"++-+0\"");
    CHECK(refusal(
              "signs",
              {{"length_samples", std::int64_t{4}}, {"at_samples", std::int64_t{2}}, {"signs", std::string("+-+")}}) ==
          "signs: there are 3 signs for 2 samples\n  give length_samples = 5 or more");
}
