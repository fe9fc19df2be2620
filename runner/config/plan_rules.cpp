// [[rule]] and [[case.rule]] of a plan.
#include "runner/config/plan_reader.hpp"

namespace halflsb {

namespace {

RuleContext context_of(const Signal& signal, double rate_hz) {
    RuleContext context;
    context.rate_hz = rate_hz;
    context.output_has_lsb = signal.output.has_lsb();
    if (context.output_has_lsb)
        context.output_full_scale_lsb = full_scale_value(signal.output) / lsb_value(signal.output);
    context.full_scale_unit = signal.full_scale_unit;
    return context;
}

std::string header_text(const TableReader& outer, std::string_view list) {
    return outer.title().empty() ? "[[" + std::string(list) + "]]" : "[[case." + std::string(list) + "]]";
}

/// "unchanged, repeat or blocks"
std::string kinds_without_reference() {
    std::vector<std::string> kinds;
    for (const Recipe& recipe : rule_recipes()) {
        if (!needs_oracle(recipe.name)) kinds.push_back(quoted(recipe.name));
    }
    std::string text;
    for (std::size_t i = 0; i < kinds.size(); ++i)
        text += (i == 0 ? "" : i + 1 == kinds.size() ? " or " : ", ") + kinds[i];
    return text;
}

void refuse_without_reference(TableReader& reader, std::string_view kind) {
    reader.refuse(reader.place_of("kind"),
                  "a rule of kind \"" + std::string(kind) + "\" needs a reference, and the filter is unknown",
                  "rules of kind " + kinds_without_reference() +
                      " hold without one; or say in [[filter]] what the firmware computes");
}

}  // namespace

ReadRules read_rules(ReadContext& context, TableReader& outer, const PlanFacts& facts, std::optional<double> rate_hz) {
    const std::size_t before = context.problems.count();
    ReadRules read;
    const TomlValue* first_latency = nullptr;
    for (const TomlValue* table : outer.tables("rule")) {
        if (!read.first) read.first = table->place;
        TableReader reader(context, *table, header_text(outer, "rule"), &outer);
        const Recipe* recipe = reader.chosen_recipe("kind", rule_recipes());
        if (recipe == nullptr) continue;
        const ParameterValues values = reader.parameters(*recipe);
        reader.refuse_unknown_keys();
        if (facts.filters != nullptr && facts.filters->is_unknown && needs_oracle(recipe->name))
            refuse_without_reference(reader, recipe->name);
        if (recipe->name == "latency") {
            if (first_latency != nullptr) {
                reader.refuse(table->place,
                              "a second latency rule, beside the one in " +
                                  context.problems.line_text(first_latency->place, table->place),
                              "a response has one latency; keep one of the two");
            }
            first_latency = table;
        }
        if (!reader.is_clean() || facts.signal == nullptr) continue;
        auto rule = make_rule(recipe->name, values, context_of(*facts.signal, rate_hz.value_or(facts.signal->rate_hz)));
        if (rule) {
            rule->position = context.position_of(table->place);
            read.rules.push_back(std::move(*rule));
        } else {
            reader.refuse(rule.error());
        }
    }
    read.is_clean = facts.signal != nullptr && context.problems.count() == before;
    return read;
}

}  // namespace halflsb
