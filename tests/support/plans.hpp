// Plans for tests, made in memory: a moving average in Q15 unless the test says otherwise.
#pragma once

#include <catch2/catch.hpp>
#include <string>
#include <utility>
#include <vector>

#include "oracle/judge/case_rates.hpp"
#include "tests/support/declared.hpp"

namespace halflsb::test {

inline ParameterValues values(std::vector<std::pair<std::string, ParameterValue>> list) {
    ParameterValues made;
    for (auto& [name, value] : list) made.set(name, std::move(value));
    return made;
}

inline Plan moving_average_plan(int points = 16) {
    Plan plan;
    plan.title = "a plan";
    plan.file = "plan.toml";
    plan.signal.rate_hz = 1200.0;
    plan.signal.input = *sample_format("q15");
    plan.signal.output = *sample_format("q15");
    FilterStage stage;
    stage.design = MovingAverage{points};
    plan.filter.push_back(stage);
    return plan;
}

/// y = y + (x - y) / 8, rounded once, halves upward.
inline Plan one_pole_plan() {
    Plan plan = moving_average_plan();
    plan.filter[0].design = BiquadCascade{{{0.125, 0.0, 0.0, -0.875, 0.0}}};
    plan.filter[0].kind = "biquad-cascade";
    plan.filter[0].coefficient_fraction_bits = 3;
    plan.filter[0].arithmetic.coefficient_fraction_bits = 3;
    plan.filter[0].arithmetic.rounding = Rounding::half_up;
    return plan;
}

inline Rule rule(const Plan& plan, const std::string& kind, const ParameterValues& given) {
    const SampleFormat& output = plan.signal.output;
    const RuleContext context{plan.signal.rate_hz, output.has_lsb(),
                              output.has_lsb() ? full_scale_value(output) / lsb_value(output) : 0.0,
                              plan.signal.full_scale_unit};
    auto made = make_rule(kind, given, context);
    REQUIRE(made);
    made->position = {"plan.toml", 20, 1};
    return *made;
}

inline Rule implicit_latency() { return {LatencyRule{0, true}, {"plan.toml", 10, 1}}; }

inline Case a_case(const Plan& plan, const std::string& shape, const ParameterValues& given, std::vector<Rule> rules) {
    Case made;
    made.name = "a case";
    made.shape = shape;
    made.stimulus_values = given;
    auto stimulus = make_stimulus(shape, given, {plan.signal.rate_hz, plan.signal.input});
    REQUIRE(stimulus);
    made.stimulus = std::move(*stimulus);
    made.rules = std::move(rules);
    made.position = {"plan.toml", 10, 1};
    return made;
}

/// What a right board returns: the declared reference of each channel, rounded once; the codes of an instant adjacent.
inline std::vector<Code> right_response(const Plan& plan, const Case& the_case, Rounding rounding = Rounding::half_up) {
    const auto length = static_cast<std::size_t>(the_case.stimulus->length_samples());
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    const auto returned = static_cast<std::size_t>(returned_samples(plan, the_case));
    std::vector<Code> sent(length * channels), codes(returned * channels), one(length);
    std::vector<double> in(length), out(returned);
    fill_case_codes(plan, the_case, 0, sent);
    for (std::size_t c = 0; c < channels; ++c) {
        for (std::size_t n = 0; n < length; ++n) one[n] = sent[n * channels + c];
        values_of(plan.signal.input, one, in);
        declared_filter(chain_of(plan, the_case, static_cast<int>(c) + 1), plan.signal.input, plan.signal.output,
                        plan.signal.output_per_input)
            ->process(in, out);
        for (std::size_t n = 0; n < returned; ++n)
            codes[n * channels + c] = code_of(plan.signal.output, out[n], rounding);
    }
    return codes;
}

}  // namespace halflsb::test
