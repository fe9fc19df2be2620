// The reference in docs/plan.md and docs/rig.md, written from the tables that the readers walk. A test
// holds the pages to it; tests/runner/config/reference_test.cpp says how to renew them.
#pragma once

#include <string>
#include <string_view>

namespace halflsb {

/// Markdown: the keys of a plan's tables, every shape, filter and rule.
std::string plan_reference();
/// Markdown: the keys of a rig's tables.
std::string rig_reference();

/// A page with the text between its two marker comments replaced; the page unchanged without markers.
std::string with_reference(std::string_view page, std::string_view reference);

}  // namespace halflsb
