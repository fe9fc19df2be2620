// Reads a plan: docs/plan.md is its reference. Strict: what is not known, or contradicts itself, is
// refused, and everything that is wrong is said at once.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <variant>

#include "oracle/judge/plan.hpp"
#include "runner/config/problems.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

struct PlanOptions {
    /// Files that the plan names lie under it; "" is the plan's own folder.
    std::string root;
    /// Takes the place of the seed of every stimulus that has one (--seed).
    std::optional<std::uint64_t> seed;
    /// What Plan::file and every PlanPosition call the plan; "" is its path. Messages name the path in any event.
    /// For a plan that was recorded with a run under its old name.
    std::string shown_name = {};
};

/// A plan comes with a pull request: it can name no command, no link, and no file outside the root. What it
/// includes is joined (plan_tree.hpp), [case.each] expanded (plan_each.hpp); positions in an included file call it
/// by its path under the root.
/// Costs up to one pass of the reference for each case with a written latency rule, which is refused
/// where the case cannot tell (judge/admission.hpp).
std::variant<Plan, ReadProblems> read_plan(const std::string& path, const Files& files,
                                           const PlanOptions& options = {});
/// The same of a text that lies in no file; `path` is what it is called.
std::variant<Plan, ReadProblems> read_plan_text(const std::string& text, const std::string& path, const Files& files,
                                                const PlanOptions& options);

}  // namespace halflsb
