// [signal] and [[filter]] of a plan.
#include "runner/config/plan_reader.hpp"
#include "runner/config/plan_words.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

void refuse_zero(TableReader& reader, const Recipe& recipe, const ParameterValues& values, std::string_view name) {
    if (values.number(recipe, name) == 0.0) {
        reader.refuse(reader.place_of(name), std::string(name) + " is 0",
                      "give a number other than 0, or leave it out");
    }
}

/// What a code is worth differs between the families, so the plan must say how values go from one to the
/// other; within one family a value is a value.
void check_families(TableReader& reader, const ParameterValues& values, const Signal& signal) {
    const bool given = values.has("output_per_input");
    const std::string pair = std::string(signal.input.name) + " in and " + std::string(signal.output.name) + " out";
    if (signal.input.family != signal.output.family && !given) {
        reader.refuse(
            reader.place_of("output"), pair + " are of different families, so nothing says what gain 1 is",
            "add output_per_input: the value of the output format that stands for the value 1 of the input format");
    }
    if (signal.input.family == signal.output.family && given) {
        reader.refuse(reader.place_of("output_per_input"),
                      "output_per_input has no meaning with " + pair + ", values of one family",
                      "leave it out; a gain belongs in the filter");
    }
}

}  // namespace

std::optional<Signal> read_signal(ReadContext& context, TableReader& top) {
    const TomlValue* table = top.table("signal", true);
    if (table == nullptr) return std::nullopt;
    TableReader reader(context, *table, "[signal]", &top);
    const Recipe& recipe = signal_recipe();
    const ParameterValues values = reader.parameters(recipe);
    reader.refuse_unknown_keys();
    refuse_zero(reader, recipe, values, "full_scale_unit");
    refuse_zero(reader, recipe, values, "output_per_input");

    Signal signal;
    const auto input = values.has("input") ? sample_format(*values.text(recipe, "input")) : std::nullopt;
    const auto output = values.has("output") ? sample_format(*values.text(recipe, "output")) : std::nullopt;
    if (input && output) {
        signal.input = *input;
        signal.output = *output;
        check_families(reader, values, signal);
    }
    if (!reader.is_clean()) return std::nullopt;
    signal.rate_hz = *values.number(recipe, "rate_hz");
    signal.output_per_input = values.number(recipe, "output_per_input").value_or(1.0);
    signal.filter = values.text(recipe, "filter").value_or("");
    signal.unit = values.text(recipe, "unit").value_or("");
    signal.full_scale_unit = values.number(recipe, "full_scale_unit");
    signal.quantise = *rounding_from(*values.text(recipe, "quantise"));
    return signal;
}

std::optional<FilterChain> read_filters(ReadContext& context, TableReader& top) {
    const std::size_t before = context.problems.count();
    FilterChain chain;
    const bool is_written = top.entry("filter") != nullptr;
    const auto tables = top.tables("filter");
    for (const TomlValue* table : tables) {
        TableReader reader(context, *table, "[[filter]]", &top);
        const Recipe* recipe = reader.chosen_recipe("kind", filter_recipes());
        if (recipe == nullptr) continue;
        const ParameterValues values = reader.parameters(*recipe);
        reader.refuse_unknown_keys();
        if (!reader.is_clean()) continue;
        auto stage = make_stage(recipe->name, values);
        if (stage) {
            chain.push_back(std::move(*stage));
        } else {
            reader.refuse(stage.error());
        }
    }
    if (tables.empty() && (!is_written || context.problems.count() == before)) {
        top.refuse(top.place_of("filter"), "the file has no [[filter]]",
                   "say what the firmware computes, at least one stage");
    }
    if (context.problems.count() != before) return std::nullopt;
    return chain;
}

}  // namespace halflsb
