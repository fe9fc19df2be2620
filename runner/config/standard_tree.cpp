// The standard set in the tree of a plan that has no case, for the plan as it is understood.
#include <algorithm>

#include "runner/config/standard_set.hpp"

namespace halflsb {
namespace {

std::vector<TomlValue> rules_of(const TomlValue& table) {
    const TomlEntry* rules = table.find("rule");
    return rules == nullptr ? std::vector<TomlValue>{} : rules->value.items;
}

/// Of all that are written those that the plan's case of this name is held to; none where there is no such case.
std::vector<TomlValue> held_rules(const TomlValue& table, const Plan& plan, const std::vector<TomlValue>& written,
                                  const ReadContext& context) {
    const std::string& name = table.find("name")->value.text;
    std::vector<TomlValue> held;
    for (const TomlValue& rule : written) {
        const PlanPosition position = context.position_of(rule.place);
        const bool is_held = std::any_of(plan.cases.begin(), plan.cases.end(), [&](const Case& the_case) {
            // What a rule has sent again holds the rule.
            if (the_case.name != name && !(the_case.companion && the_case.companion->base == name)) return false;
            return std::any_of(the_case.rules.begin(), the_case.rules.end(),
                               [&](const Rule& asked) { return asked.position == position; });
        });
        if (is_held) held.push_back(rule);
    }
    return held;
}

}  // namespace

void put_standard_cases(TomlValue& tree, TomlValue set, const Plan& plan, const ReadContext& context) {
    TomlValue cases = set.find("case")->value;
    std::vector<TomlValue> written = rules_of(tree);
    for (const TomlValue& table : cases.items) {
        for (TomlValue& rule : rules_of(table)) written.push_back(std::move(rule));
    }
    for (TomlValue& table : cases.items) {
        const std::vector<TomlValue> held = held_rules(table, plan, written, context);
        for (TomlEntry& entry : table.entries) {
            if (entry.key == "rule") entry.value.items = held;
        }
    }
    std::erase_if(cases.items, [](const TomlValue& table) { return rules_of(table).empty(); });
    std::erase_if(tree.entries, [](const TomlEntry& entry) { return entry.key == "rule" || entry.key == "case"; });
    tree.entries.push_back({"case", {}, std::move(cases)});
}

}  // namespace halflsb
