// What plans say of the small boards: signal, designs, and stages that round once.
#pragma once

#include <array>
#include <optional>
#include <string>
#include <utility>
#include <vector>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/plan.hpp"

namespace halflsb::test {

/// b0 b1 b2 a1 a2 of the 2nd order, 0.02 of the rate.
inline const std::array<double, 5> low_pass{0.00362168, 0.00724336, 0.00362168, -1.82269493, 0.83718165};
inline const std::vector<double> slanted{0.02, -0.05, 0.11, 0.31, 0.4, 0.17, -0.06, 0.03, 0.013};

inline Signal q15_signal() {
    Signal signal;
    signal.rate_hz = 1200.0;
    signal.input = *sample_format("q15");
    signal.output = signal.input;
    return signal;
}

inline FilterStage declared(FilterDesign design, std::string kind, std::optional<int> fraction_bits) {
    FilterStage stage;
    stage.design = std::move(design);
    stage.kind = std::move(kind);
    stage.coefficient_fraction_bits = fraction_bits;
    stage.arithmetic.coefficient_fraction_bits = fraction_bits;
    stage.arithmetic.rounding = Rounding::half_up;
    stage.arithmetic.accumulator_bits = 64;
    return stage;
}

}  // namespace halflsb::test
