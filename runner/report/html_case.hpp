// One case as a part of the page.
#pragma once

#include <cstddef>
#include <string>

#include "oracle/judge/plots.hpp"
#include "runner/world/result.hpp"

namespace halflsb {

/// run.cases[index] as an element "details": how it was captured, its rules (those that did not pass first), its plots.
/// `plots` is the element that stands for them. `has_plan_text`: the page has the plan's lines.
std::string case_html(const RunResult& run, std::size_t index, const std::string& plots, bool has_plan_text);

/// The figures of a case's plots, with the first bad samples of its rules marked. `first_number` tells them apart.
std::string plots_html(const CaseResult& result, CasePlots plots, std::size_t first_number);

/// Its row in the table of cases.
std::string case_row(const RunResult& run, std::size_t index);

/// Where the case stands on the page: "case-3".
std::string case_anchor(const CaseResult& result);

}  // namespace halflsb
