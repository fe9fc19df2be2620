#include "stimuli/rounding.hpp"

#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

using namespace halflsb;

namespace {

struct Row {
    double value, floor, toward_zero, half_up, half_away, half_even;
};

void check_row(const Row& row) {
    INFO("value " << row.value);
    CHECK(round_to_whole(row.value, Rounding::floor) == row.floor);
    CHECK(round_to_whole(row.value, Rounding::toward_zero) == row.toward_zero);
    CHECK(round_to_whole(row.value, Rounding::half_up) == row.half_up);
    CHECK(round_to_whole(row.value, Rounding::half_away) == row.half_away);
    CHECK(round_to_whole(row.value, Rounding::half_even) == row.half_even);
}

}  // namespace

TEST_CASE("rounding: the five roundings differ where their names say", "[stimuli]") {
    for (const Row& row : {
             Row{2.5, 2, 2, 3, 3, 2},
             Row{-2.5, -3, -2, -2, -3, -2},
             Row{3.5, 3, 3, 4, 4, 4},
             Row{-3.5, -4, -3, -3, -4, -4},
             Row{0.5, 0, 0, 1, 1, 0},
             Row{-0.5, -1, 0, 0, -1, 0},
             Row{2.4, 2, 2, 2, 2, 2},
             Row{-2.4, -3, -2, -2, -2, -2},
             Row{2.6, 2, 2, 3, 3, 3},
             Row{-2.6, -3, -2, -3, -3, -3},
             Row{7, 7, 7, 7, 7, 7},
             Row{-7, -7, -7, -7, -7, -7},
             Row{0, 0, 0, 0, 0, 0},
         }) {
        check_row(row);
    }
}

TEST_CASE("rounding: the neighbours of a tie are not taken for the tie", "[stimuli]") {
    const double below_half = std::nextafter(0.5, 0.0);  // plus 1/2 it rounds to 1 in doubles
    check_row({below_half, 0, 0, 0, 0, 0});
    check_row({-below_half, -1, 0, 0, 0, 0});
    const double above_half = std::nextafter(0.5, 1.0);
    check_row({above_half, 0, 0, 1, 1, 1});
    check_row({-above_half, -1, 0, -1, -1, -1});
    const double large = 0x1p51 + 0.5;  // the largest ties that the range allows
    check_row({large, 0x1p51, 0x1p51, 0x1p51 + 1, 0x1p51 + 1, 0x1p51});
    check_row({-large, -0x1p51 - 1, -0x1p51, -0x1p51, -0x1p51 - 1, -0x1p51});
}

TEST_CASE("rounding: NaN stays NaN and infinities stay themselves", "[stimuli]") {
    const double infinity = std::numeric_limits<double>::infinity();
    for (const auto name : rounding_names()) {
        const Rounding rounding = *rounding_from(name);
        CHECK(std::isnan(round_to_whole(std::nan(""), rounding)));
        CHECK(round_to_whole(infinity, rounding) == infinity);
        CHECK(round_to_whole(-infinity, rounding) == -infinity);
    }
}

TEST_CASE("rounding: names and values belong together", "[stimuli]") {
    CHECK(rounding_names() ==
          std::vector<std::string_view>{"floor", "toward-zero", "half-up", "half-away", "half-even"});
    CHECK(name_of(Rounding::half_away) == "half-away");
    for (const auto name : rounding_names()) CHECK(name_of(*rounding_from(name)) == name);
    CHECK_FALSE(rounding_from("half_up"));
    CHECK_FALSE(rounding_from(""));
}
