#include "runner/choose_cases.hpp"

#include <algorithm>
#include <set>
#include <string_view>

#include "runner/cli/case_selection.hpp"
#include "runner/config/standard_set.hpp"
#include "runner/paper.hpp"
#include "runner/report/people.hpp"

namespace halflsb {
namespace {

bool is_long(const Case& the_case) {
    return the_case.is_standard &&
           std::find(the_case.labels.begin(), the_case.labels.end(), long_label) != the_case.labels.end();
}

/// A companion is nothing without its base, and what a case is held to is judged in its companions too.
std::vector<std::size_t> with_family(const Plan& plan, const std::vector<std::size_t>& chosen) {
    std::set<std::string_view> bases, named;
    for (const std::size_t index : chosen) {
        const Case& the_case = plan.cases[index];
        named.insert(the_case.name);
        if (the_case.companion) bases.insert(the_case.companion->base);
    }
    std::vector<std::size_t> all;
    for (std::size_t index = 0; index < plan.cases.size(); ++index) {
        const Case& the_case = plan.cases[index];
        const bool is_of_chosen = the_case.companion && named.count(the_case.companion->base) > 0;
        if (named.count(the_case.name) > 0 || bases.count(the_case.name) > 0 || is_of_chosen) all.push_back(index);
    }
    return all;
}

Outcome<std::vector<std::size_t>> by_name_and_label(const Plan& plan, const Options& options) {
    std::vector<std::string> names;
    std::vector<std::vector<std::string>> labels;
    for (const Case& the_case : plan.cases) {
        names.push_back(the_case.name);
        labels.push_back(the_case.labels);
    }
    auto selected = select_cases(names, options.case_patterns);
    if (!selected) return selected;
    auto chosen = select_labelled(*selected, labels, options.labels);
    if (!chosen) return chosen;
    return with_family(plan, *chosen);
}

double slowest_wire_s(const Plan& plan, const Case& the_case, const std::vector<Rig>& rigs) {
    double most_s = 0.0;
    for (const Rig& rig : rigs) most_s = std::max(most_s, wire_seconds_of(plan, the_case, rig));
    return most_s;
}

/// Moves what has no time to the cases that are left out.
Outcome<void> cut_to(double limit_s, const std::string& asked, const Plan& plan, const std::vector<Rig>& rigs,
                     CaseChoice& choice) {
    if (rigs.empty()) {
        return Error{ErrorKind::usage, "--for", "the time on the wire hangs on the rig, and there is no --rig",
                     "give the rig too"};
    }
    double total_s = 0.0;
    std::size_t fitting = 0;
    for (const std::size_t index : choice.selected) {
        total_s += slowest_wire_s(plan, plan.cases[index], rigs);
        if (total_s > limit_s) break;
        ++fitting;
    }
    if (fitting == 0) {
        return Error{
            ErrorKind::usage, "--for",
            "in " + asked + " not even the first case fits: it takes " + duration_text(total_s) + " on the wire",
            "give more time, or a higher baud in the rig"};
    }
    if (fitting == choice.selected.size()) return {};
    const auto first_out = choice.selected.begin() + static_cast<std::ptrdiff_t>(fitting);
    choice.left_out.assign(first_out, choice.selected.end());
    choice.selected.erase(first_out, choice.selected.end());
    choice.why_left_out = "no time within --for " + asked;
    return {};
}

}  // namespace

Outcome<CaseChoice> choose_cases(const Plan& plan, const Options& options, const std::vector<Rig>& rigs) {
    auto selected = by_name_and_label(plan, options);
    if (!selected) return selected.error();
    CaseChoice choice{std::move(*selected), {}, ""};
    if (options.time_limit_s) {
        if (auto cut = cut_to(*options.time_limit_s, options.time_limit_text, plan, rigs, choice); !cut)
            return cut.error();
        return choice;
    }
    if (options.all || !options.case_patterns.empty() || !options.labels.empty()) return choice;
    const auto is_short = [&](std::size_t index) { return !is_long(plan.cases[index]); };
    const auto first_long = std::stable_partition(choice.selected.begin(), choice.selected.end(), is_short);
    choice.left_out.assign(first_long, choice.selected.end());
    choice.selected.erase(first_long, choice.selected.end());
    if (!choice.left_out.empty()) choice.why_left_out = "--all runs it too";
    return choice;
}

}  // namespace halflsb
