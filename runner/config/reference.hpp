// The reference in docs/plan.md and docs/rig.md, written from the tables that the readers walk. A test
// holds the pages to it; DEVELOPERS.md says how to write them anew.
#pragma once

#include <string>

namespace halflsb {

/// Markdown: the keys of a plan's tables, every shape, filter and rule.
std::string plan_reference();
/// Markdown: the keys of a rig's tables.
std::string rig_reference();

}  // namespace halflsb
