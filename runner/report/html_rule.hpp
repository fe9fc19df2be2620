// One judged rule as a part of the page: the sentence that says why, its figures, its first bad sample.
#pragma once

#include <string>

#include "runner/world/result.hpp"

namespace halflsb {

/// Where a rule of the plan stands: a link into the plan's text on the page where that is there.
std::string place_html(const PlanPosition& position, const std::string& plan_file, bool has_plan_text);

/// `signal` is that of the case, at the rate of its response.
std::string rule_html(const RuleVerdict& verdict, const Signal& signal, const std::string& place);

/// The verdict as a coloured word.
std::string verdict_html(std::string_view word);

}  // namespace halflsb
