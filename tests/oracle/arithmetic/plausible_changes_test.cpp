// Which other decisions a firmware may have taken: those that a stage of its kind can take, and no others.
#include "oracle/arithmetic/plausible_changes.hpp"

#include <catch2/catch.hpp>
#include <string>

namespace halflsb {
namespace {

std::vector<std::string> changes_of(FilterDesign design, const StageArithmetic& arithmetic,
                                    std::string_view format = "q15") {
    FilterStage stage;
    stage.design = std::move(design);
    stage.arithmetic = arithmetic;
    stage.coefficient_fraction_bits = arithmetic.coefficient_fraction_bits;
    std::vector<std::string> names;
    for (const ArithmeticChange& change :
         plausible_changes({stage}, *sample_format(format), *sample_format(format), 1.0))
        names.push_back(change.name);
    return names;
}

StageArithmetic floor_arithmetic() {
    StageArithmetic arithmetic;
    arithmetic.rounding = Rounding::floor;
    arithmetic.output_overflow = Overflow::saturate;
    return arithmetic;
}

const std::vector<std::string> other_roundings{"toward-zero in place of floor", "half-up in place of floor",
                                               "half-away in place of floor", "half-even in place of floor"};

std::vector<std::string> with(std::vector<std::string> list, const std::vector<std::string>& more) {
    list.insert(list.end(), more.begin(), more.end());
    return list;
}

}  // namespace

TEST_CASE("plausible changes: a CIC and a median have no sum and no product to decide about", "[arithmetic]") {
    CHECK(changes_of(CicDecimator{3, 8, 1, 9}, floor_arithmetic()) == with(other_roundings, {"an output that wraps"}));
    CHECK(changes_of(Median{4}, floor_arithmetic()) == with(other_roundings, {"an output that wraps"}));
}

TEST_CASE("plausible changes: registers of a CIC that discard may as well keep all", "[arithmetic]") {
    StageArithmetic arithmetic = floor_arithmetic();
    arithmetic.discarded_bits = {0, 3, 4, 5, 6, 7};
    CHECK(changes_of(CicDecimator{3, 8, 1, 9}, arithmetic) ==
          with(other_roundings, {"an output that wraps", "registers that discard nothing"}));
}

TEST_CASE("plausible changes: a FIR may shorten products, save the fraction, and sum in a narrower word",
          "[arithmetic]") {
    StageArithmetic arithmetic = floor_arithmetic();
    arithmetic.coefficient_fraction_bits = 15;
    arithmetic.accumulator_bits = 40;
    CHECK(changes_of(Fir{{0.25, 0.5, 0.25}}, arithmetic) ==
          with(other_roundings,
               {"each product shortened before it is added", "the fraction saved", "an accumulator of 32 bits",
                "an output that wraps", "an accumulator that saturates", "coefficients cut off toward zero"}));
}

TEST_CASE("plausible changes: floats may be fused, or added in another order", "[arithmetic]") {
    StageArithmetic arithmetic;
    arithmetic.number = NumberKind::float32;
    CHECK(changes_of(Fir{{0.25, 0.5, 0.25}}, arithmetic, "f32") ==
          std::vector<std::string>{"fused multiply-adds", "the oldest added first"});
    CHECK(changes_of(Median{5}, arithmetic, "f32").empty());
}

}  // namespace halflsb
