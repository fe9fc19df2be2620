// The response to a step against limits of the figures of oracle/measure/transition.hpp.
#pragma once

#include <cstdint>
#include <memory>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"
#include "oracle/judge/rule_judge.hpp"
#include "oracle/judge/step_window.hpp"
#include "oracle/measure/transition.hpp"

namespace halflsb {

/// So many samples before the step tell the noise.
inline constexpr std::int64_t least_samples_before_step = 16;

/// What the measure is asked: board and design alike.
TransitionQuestion transition_question(const TransitionRule& rule, const Signal& signal, const StepWindow& step);

/// One figure that the rule limits.
struct LimitedFigure {
    const char* name;
    const char* unit;
    TransitionFigure TransitionFigures::*figure;
    double limit;
};
/// All but the final value.
std::vector<LimitedFigure> limited_figures(const TransitionRule& rule);

WantedReferences wanted_by(const TransitionRule& rule, bool is_driven);
std::unique_ptr<RuleJudge> make_judge(const TransitionRule& rule, const Rule& asked, const JudgedChannel& channel);
void check(const TransitionRule& rule, const Rule& asked, const Plan& plan, const Case& the_case,
           std::vector<Refusal>& refusals);

}  // namespace halflsb
