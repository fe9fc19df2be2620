// [[rule]] and [[case]] of a plan.
#include <algorithm>

#include "runner/config/plan_each.hpp"
#include "runner/config/plan_reader.hpp"
#include "runner/config/plan_words.hpp"

namespace halflsb {

namespace {

RuleContext context_of(const Signal& signal) {
    RuleContext context;
    context.rate_hz = signal.rate_hz;
    context.output_has_lsb = signal.output.has_lsb();
    if (context.output_has_lsb)
        context.output_full_scale_lsb = full_scale_value(signal.output) / lsb_value(signal.output);
    context.full_scale_unit = signal.full_scale_unit;
    return context;
}

std::string header_text(const TableReader& outer, std::string_view list) {
    return outer.title().empty() ? "[[" + std::string(list) + "]]" : "[[case." + std::string(list) + "]]";
}

/// TOML's trap: [case.stimulus] belongs to the [[case]] above it, so one that follows a rule was meant for
/// a case whose header is missing.
void refuse_stimulus_after_rule(TableReader& reader, const TomlValue& stimulus, const ReadRules& rules) {
    if (stimulus.is_inline || !rules.first || stimulus.place < *rules.first) return;
    reader.refuse(stimulus.place, "a stimulus after a rule of the same case: is a [[case]] missing above it?",
                  "start the next case with [[case]] and its name; within a case the stimulus stands before the rules");
}

struct ReadStimulus {
    std::string shape;
    ParameterValues values;
    std::shared_ptr<const Stimulus> stimulus;
};

std::optional<ReadStimulus> read_stimulus(ReadContext& context, const TomlValue& table, const TableReader& outer,
                                          const Signal* signal, std::optional<std::uint64_t> seed) {
    TableReader reader(context, table, "[case.stimulus]", &outer);
    const Recipe* recipe = reader.chosen_recipe("shape", stimulus_recipes());
    if (recipe == nullptr) return std::nullopt;
    ReadStimulus read{std::string(recipe->name), reader.parameters(*recipe), nullptr};
    reader.refuse_unknown_keys();
    if (!reader.is_clean() || signal == nullptr) return std::nullopt;
    if (seed && find_parameter(*recipe, "seed") != nullptr) read.values.set("seed", static_cast<std::int64_t>(*seed));
    auto stimulus = make_stimulus(recipe->name, read.values, {signal->rate_hz, signal->input});
    if (!stimulus) {
        reader.refuse(stimulus.error());
        return std::nullopt;
    }
    read.stimulus = std::move(*stimulus);
    return read;
}

}  // namespace

ReadRules read_rules(ReadContext& context, TableReader& outer, const Signal* signal) {
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
        if (recipe->name == "latency") {
            if (first_latency != nullptr) {
                reader.refuse(table->place,
                              "a second latency rule, beside the one in " +
                                  context.problems.line_text(first_latency->place, table->place),
                              "a response has one latency; keep one of the two");
            }
            first_latency = table;
        }
        if (!reader.is_clean() || signal == nullptr) continue;
        auto rule = make_rule(recipe->name, values, context_of(*signal));
        if (rule) {
            rule->position = context.position_of(table->place);
            read.rules.push_back(std::move(*rule));
        } else {
            reader.refuse(rule.error());
        }
    }
    read.is_clean = signal != nullptr && context.problems.count() == before;
    return read;
}

ReadCase read_case(ReadContext& context, const TomlValue& table, const TableReader& top, const Signal* signal,
                   std::optional<std::uint64_t> seed) {
    ReadCase read;
    read.place = table.place;
    TableReader reader(context, table, "[[case]]", &top);
    const Recipe& recipe = case_recipe();
    const ParameterValues values = reader.parameters(recipe);
    // Known before its inner tables are read, so that a key of the case under their headers is told from
    // an unknown one.
    reader.entry(each_word);
    const TomlValue* stimulus_table = reader.table("stimulus", true);
    std::optional<ReadStimulus> stimulus;
    if (stimulus_table != nullptr) stimulus = read_stimulus(context, *stimulus_table, reader, signal, seed);
    ReadRules rules = read_rules(context, reader, signal);
    if (stimulus_table != nullptr) refuse_stimulus_after_rule(reader, *stimulus_table, rules);
    reader.refuse_unknown_keys();

    read.has_rules = rules.first.has_value();
    if (values.has("name")) {
        read.the_case.name = *values.text(recipe, "name");
        read.name_place = reader.place_of("name");
    }
    read.the_case.position = context.position_of(table.place);
    read.is_clean = reader.is_clean() && stimulus && rules.is_clean;
    if (!read.is_clean) return read;
    read.the_case.shape = stimulus->shape;
    read.the_case.stimulus_values = std::move(stimulus->values);
    read.the_case.stimulus = std::move(stimulus->stimulus);
    read.the_case.rules = std::move(rules.rules);
    return read;
}

}  // namespace halflsb
