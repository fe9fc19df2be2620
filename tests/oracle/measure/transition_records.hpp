// Step responses to measure, and the questions and answers of the tests of transition.
#pragma once

#include <functional>

#include "oracle/measure/transition.hpp"
#include "tests/oracle/support.hpp"

namespace halflsb::testing {

inline constexpr std::int64_t before = 64;  // samples ahead of the step, a power of two so that instants stay exact

// before zeros, then y(n) for n = 0, 1 ..., all moved to levels first .. second.
inline std::vector<double> record_of(const std::function<double(double)>& y, std::size_t samples,
                                     StateLevels levels = {0, 1}) {
    std::vector<double> record(static_cast<std::size_t>(before), levels.first);
    for (std::size_t n = 0; n < samples; ++n) {
        record.push_back(levels.first + (levels.second - levels.first) * y(static_cast<double>(n)));
    }
    return record;
}

inline TransitionQuestion question_of(StateLevels levels = {0, 1}) {
    TransitionQuestion question;
    question.step_index = before;
    question.levels = levels;
    return question;
}

inline TransitionFigures figures_of(const TransitionQuestion& question, std::span<const double> samples) {
    const auto answer = measure_transition(question, samples);
    REQUIRE(answer.figures);
    CHECK(answer.fault == TransitionFault::none);
    return *answer.figures;
}

inline double value(const TransitionFigure& figure) {
    INFO(reason_of(figure.fault));
    REQUIRE(figure.figure);
    CHECK(figure.fault == TransitionFault::none);
    return figure.figure->value;
}

/// Of noise and codes together; in these records there is one or the other.
inline double uncertainty(const TransitionFigure& figure) {
    REQUIRE(figure.figure);
    return figure.figure->standard_uncertainty + figure.figure->bound;
}

inline TransitionFault fault_of(const TransitionFigure& figure) {
    CHECK(figure.figure.has_value() == (figure.fault == TransitionFault::none));
    return figure.fault;
}

inline TransitionFault fault_of(const TransitionQuestion& question, std::span<const double> samples) {
    const auto answer = measure_transition(question, samples);
    CHECK(answer.figures.has_value() == (answer.fault == TransitionFault::none));
    return answer.fault;
}

// Step of a second order with natural frequency 1, and its slope.
inline double second_order(double zeta, double t) {
    if (zeta == 1.0) return 1.0 - (1.0 + t) * std::exp(-t);
    if (zeta > 1.0) {
        const double root = std::sqrt(zeta * zeta - 1.0), fast = zeta + root, slow = zeta - root;
        return 1.0 - (fast * std::exp(-slow * t) - slow * std::exp(-fast * t)) / (2.0 * root);
    }
    const double w = std::sqrt(1.0 - zeta * zeta);
    return 1.0 - std::exp(-zeta * t) * (std::cos(w * t) + zeta / w * std::sin(w * t));
}

}  // namespace halflsb::testing
