// The comb.
#include <cmath>

#include "oracle/filters/filter_kind.hpp"
#include "oracle/filters/stability.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

namespace {

constexpr double most_delay_samples = 65536.0;

std::optional<std::string> complaint_about_comb(const FilterStage& stage) {
    const Comb& comb = std::get<Comb>(stage.design);
    if (!(std::fabs(comb.feedback) < 1.0)) {
        return "the comb is unstable: feedback = " + text_of(comb.feedback) + " puts its poles at radius " +
               text_of_radius(pole_radius(comb));
    }
    if (comb.direct == 0.0 && comb.forward == 0.0) return "the comb passes nothing: direct = 0, forward = 0";
    return std::nullopt;
}

Outcome<FilterDesign> make_comb(const Recipe& recipe, const ParameterValues& values, const StageContext&) {
    if (auto error = misfit_of(recipe, values)) return *error;
    Comb comb;
    comb.delay_samples = static_cast<int>(*values.integer(recipe, "delay_samples"));
    comb.direct = *values.number(recipe, "direct");
    comb.forward = *values.number(recipe, "forward");
    comb.feedback = *values.number(recipe, "feedback");
    const FilterStage stage{comb, std::nullopt};
    if (auto problem = complaint_about_comb(stage)) {
        const bool unstable = !(std::fabs(comb.feedback) < 1.0);
        return refuse(unstable ? "feedback" : "direct", *problem,
                      unstable ? "feedback must lie between -1 and 1, both left out: 0.999 would do"
                               : "direct, forward or both must differ from 0");
    }
    if (comb.forward == 0.0 && comb.feedback == 0.0) {
        return refuse("delay_samples", "nothing is delayed: forward = 0, feedback = 0",
                      "give forward, feedback or both; a gain alone is a fir of one tap");
    }
    return FilterDesign(comb);
}

Parameter tap(std::string_view name, double standard, std::string_view help) {
    Parameter parameter = coefficients_parameter(name, ParameterType::real, help);
    parameter.default_value = standard;
    return parameter;
}

}  // namespace

FilterKind comb_kind() {
    return {{"comb",
             "One tap forward and one back at the same delay D = delay_samples: y[n] = direct x[n] + forward x[n-D] - "
             "feedback y[n-D].",
             {{.name = "delay_samples",
               .type = ParameterType::integer,
               .unit = "samples",
               .minimum = 1.0,
               .maximum = most_delay_samples,
               .required = true,
               .help = "How old the samples at both taps are."},
              tap("direct", 1.0, "The coefficient of the newest sample."),
              tap("forward", 0.0, "The coefficient of the input delay_samples ago."),
              tap("feedback", 0.0,
                  "The coefficient of the output delay_samples ago, subtracted; between -1 and 1, both left out.")}},
            make_comb,
            complaint_about_comb};
}

}  // namespace halflsb
