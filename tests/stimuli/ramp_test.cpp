#include <cmath>

#include "make.hpp"

using namespace halflsb;

namespace {

std::unique_ptr<const Stimulus> ramp(std::int64_t length, double from, double to) {
    return made("ramp", {{"length_samples", length}, {"from_ratio", from}, {"to_ratio", to}});
}

}  // namespace

TEST_CASE("ramp: over as many samples as codes it walks through every code once", "[stimuli]") {
    for (const bool up : {true, false}) {
        const auto all = made("ramp",
                              {{"length_samples", std::int64_t{4096}},
                               {"from_codes", std::int64_t{up ? -2048 : 2047}},
                               {"to_codes", std::int64_t{up ? 2047 : -2048}}},
                              1200.0, "u12");
        for (const auto rounding : rounding_names()) {
            const auto codes = codes_of(*all, "u12", 0, 4096, *rounding_from(rounding));
            for (Code i = 0; i < 4096; ++i) REQUIRE(codes[static_cast<std::size_t>(i)] == (up ? i : 4095 - i));
        }
    }
}

TEST_CASE("ramp: it begins and ends at its levels, whatever lies between", "[stimuli]") {
    for (const std::int64_t length :
         {std::int64_t{2}, std::int64_t{3}, std::int64_t{1000}, std::int64_t{10'000'000'000}}) {
        for (const auto& [from, to] :
             {std::pair{-1.0, 1.0}, std::pair{0.1, -0.7}, std::pair{0.3, 0.30000000000000004}}) {
            const auto line = ramp(length, from, to);
            CHECK(ratios_of(*line, 0, 1)[0] == from);
            CHECK(ratios_of(*line, length - 1, 2) == std::vector<double>{to, 0.0});
        }
    }
    const auto late = made("ramp", {{"length_samples", std::int64_t{10}},
                                    {"at_samples", std::int64_t{5}},
                                    {"from_ratio", 0.0},
                                    {"to_ratio", 1.0}});
    CHECK(ratios_of(*late, 3, 8) == std::vector<double>{0, 0, 0, 0.25, 0.5, 0.75, 1.0, 0});
}

TEST_CASE("ramp: a value just short of a tie is not rounded over it", "[stimuli]") {
    // Half an LSB of q15 is 2^-16. Over 3 steps from 0 to 3 (2^-16 - 2^-80): each step is a hair below a tie,
    // far beyond the 53 bits of a double near 1, well within 2^-90.
    const double to = 3.0 * 0x1p-16;
    const auto exact = ramp(4, 0.0, to);
    CHECK(codes_of(*exact, "q15", 0, 4, Rounding::half_up) == std::vector<Code>{0, 1, 1, 2});
    // A third of the way from 2^-16 - 2^-68 to 1/4 of an LSB above: exact arithmetic decides.
    const auto below = ramp(3, 0.5 - 0x1p-54, 0.5 + 0x1p-16);  // the middle is 0.5 + 2^-17 - 2^-55
    CHECK(codes_of(*below, "q31", 1, 1, Rounding::floor)[0] == (1 << 30) + (1 << 14) - 1);
    const auto at = ramp(3, 0.5, 0.5 + 0x1p-16);
    CHECK(codes_of(*at, "q31", 1, 1, Rounding::floor)[0] == (1 << 30) + (1 << 14));
}

TEST_CASE("ramp: needs two different ends and two samples", "[stimuli]") {
    const std::int64_t ten = 10;
    CHECK(refusal("ramp", {{"length_samples", ten}, {"to_ratio", 0.5}}) ==
          "from_ratio: \"ramp\" needs from_ratio, from_codes or from_unit\n  give one of them");
    CHECK(refusal("ramp", {{"length_samples", ten}, {"from_ratio", 0.5}}) ==
          "to_ratio: \"ramp\" needs to_ratio, to_codes or to_unit\n  give one of them");
    CHECK(refusal("ramp", {{"length_samples", ten}, {"from_ratio", 0.5}, {"to_codes", std::int64_t{16384}}}) ==
          "to_codes: the ramp ends where it begins, at 0.5 of full scale\n  give another end, or use shape = \"step\"");
    CHECK(refusal("ramp", {{"length_samples", ten}, {"from_ratio", 0.5}, {"to_codes", std::int64_t{16385}}}) ==
          "accepted");
    CHECK(refusal("ramp",
                  {{"length_samples", ten}, {"at_samples", std::int64_t{9}}, {"from_ratio", 0.0}, {"to_ratio", 0.5}}) ==
          "length_samples: a ramp needs 2 samples, from at_samples on there is 1\n"
          "  make it longer, or start earlier");
    CHECK(refusal("ramp",
                  {{"length_samples", ten}, {"at_samples", std::int64_t{8}}, {"from_ratio", 0.0}, {"to_ratio", 0.5}}) ==
          "accepted");
    CHECK(refusal("ramp", {{"length_samples", ten}, {"from_ratio", 0.0}, {"from_codes", ten}, {"to_ratio", 0.5}}) ==
          "from_codes: from_ratio is given too\n  keep one of the two");
}
