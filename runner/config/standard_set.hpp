// The standard set: the cases of a plan that has none. They are written as the text of a plan, so that they are read,
// recorded and reported like any other, and can be copied into a plan (`halflsb predict PLAN --resolved`).
//
// Each case has a purpose, the faults that it shows. In order: what is cheap and proves much first; the list is cut
// from its end where time is short.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "oracle/judge/plan.hpp"
#include "oracle/judge/refusal.hpp"
#include "runner/config/plan_filters.hpp"

namespace halflsb {

/// What messages and positions call the text.
inline constexpr std::string_view standard_set_name = "standard set";
/// Of cases that only --all, --for, --case or --label select.
inline constexpr std::string_view long_label = "long";

/// [[case]] after [[case]], each with a purpose, an error rule with derived limits and an exact rule; a rule that
/// cannot be answered is left out by the reader. Lengths follow from how long the filter remembers.
/// Costs the filter's impulse response, and those of nodes whose words a signal could fill.
std::string standard_set_text(const Signal& signal, const PlanFilters& filters);

/// Takes from the plan's cases, all of the standard set, the rules that their stimuli cannot answer, and then the cases
/// that no rule is left in. What comes back is to be refused: a rule of the plan that no case can answer, a filter
/// that no limit can be derived for.
std::vector<Refusal> settle_standard_rules(Plan& plan, const std::vector<Rule>& common);

/// `set` is the tree of the text, `tree` that of the plan without cases, `plan` what was made of both. Each case gets
/// the rules that it is held to, those for every case among them: not every case can answer them.
void put_standard_cases(TomlValue& tree, TomlValue set, const Plan& plan, const ReadContext& context);

}  // namespace halflsb
