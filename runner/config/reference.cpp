#include "runner/config/reference.hpp"

#include <vector>

#include "oracle/filters/filter.hpp"
#include "oracle/rules/rule.hpp"
#include "runner/config/bands.hpp"
#include "runner/config/plan_each.hpp"
#include "runner/config/plan_tree.hpp"
#include "runner/config/plan_words.hpp"
#include "runner/config/reader.hpp"
#include "runner/config/rig_words.hpp"
#include "runner/config/value_text.hpp"
#include "runner/world/nearest.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/stimulus.hpp"

namespace halflsb {

namespace {

std::string type_text(const Parameter& parameter) {
    switch (parameter.type) {
        case ParameterType::integer:
            return "whole number";
        case ParameterType::real: {
            std::string text = "number";
            for (const std::string_view word : parameter.choices) text += " or `\"" + std::string(word) + "\"`";
            return text;
        }
        case ParameterType::text:
            return "text";
        case ParameterType::choice: {
            std::vector<std::string> words;
            for (const std::string_view choice : parameter.choices)
                words.push_back("`\"" + std::string(choice) + "\"`");
            const std::vector<std::string_view> views(words.begin(), words.end());
            return joined_words(views);
        }
        case ParameterType::reals:
            return "list of numbers";
        case ParameterType::sections:
            return "list of lists of numbers";
        case ParameterType::bands:
            return "list of bands";
        case ParameterType::file:
            return "file of numbers, under the root";
        case ParameterType::signal_file:
            return "CSV or NPY file, under the root";
        case ParameterType::mask_file:
            return "CSV file, under the root";
        case ParameterType::integers:
            return "list of whole numbers";
        case ParameterType::stimuli:
            return "list of stimuli";
    }
    return {};
}

std::string default_text(const Parameter& parameter) {
    if (parameter.required) return "required";
    if (parameter.default_value) return number_text(*parameter.default_value);
    if (parameter.type == ParameterType::choice && !parameter.choices.empty() && !parameter.optional_choice)
        return "`\"" + std::string(parameter.choices.front()) + "\"`";
    return "none";
}

/// A | would end the cell.
std::string cell(std::string_view text) {
    std::string out;
    for (const char c : text) out += c == '|' ? std::string("\\|") : std::string(1, c);
    return out;
}

std::string row(std::string_view key, std::string_view type, std::string_view range, std::string_view standard,
                std::string_view help) {
    return "| `" + std::string(key) + "` | " + cell(type) + " | " + cell(range) + " | " + cell(standard) + " | " +
           cell(help) + " |\n";
}

std::string table_start() { return "| key | value | range | default | meaning |\n|---|---|---|---|---|\n"; }

std::string rows(const Recipe& recipe) {
    std::string text;
    for (const Parameter& parameter : recipe.parameters) {
        std::string range = range_text(parameter);
        for (const std::string_view word : {"of ", "from "}) {
            if (range.starts_with(word)) range.erase(0, word.size());
        }
        if (range.empty()) range = parameter.unit;
        text += row(parameter.name, type_text(parameter), range, default_text(parameter), parameter.help);
    }
    return text;
}

std::string section(std::string_view heading, const Recipe& recipe, std::string_view further_rows = {}) {
    const std::string all_rows = rows(recipe) + std::string(further_rows);
    return std::string(heading) + "\n\n" + std::string(recipe.help) + "\n\n" +
           (all_rows.empty() ? std::string() : table_start() + all_rows + "\n");
}

std::string catalogue(std::string_view heading, std::string_view key, const std::vector<Recipe>& recipes) {
    std::string text = std::string(heading) + "\n\n";
    for (const Recipe& recipe : recipes) {
        text += section("#### `" + std::string(key) + " = \"" + std::string(recipe.name) + "\"`", recipe);
    }
    return text;
}

}  // namespace

std::string plan_reference() {
    return section("### The top of the file", plan_recipe(),
                   row(include_word, "list of files, under the root", "", "none", include_help)) +
           section("### `[signal]`", signal_recipe()) +
           section("### `[arithmetic]` and `[filter.arithmetic]`", arithmetic_recipe()) +
           catalogue("### `[[filter]]`", "kind", filter_recipes()) +
           catalogue("### `[[rule]]` and `[[case.rule]]`", "kind", rule_recipes()) +
           section("#### A band", band_recipe()) +
           section("### `[[case]]`", case_recipe(),
                   row(labels_word, "list of text", "", "none", labels_help) +
                       row(settings_word, "table of whole numbers", "", "none", settings_help) +
                       row(each_word, "table of lists", "", "none", each_help)) +
           section("### `[case.stimulus]`", case_stimulus_recipe()) +
           catalogue("#### Shapes", "shape", stimulus_recipes());
}

std::string rig_reference() {
    return section("### `[board]`", board_recipe(), row(isolated_word, "`true`", "", "required", isolated_help)) +
           section("### `[link]`", link_recipe()) + section("### `[wire]`", wire_recipe()) +
           section("### `[run]`", run_recipe()) +
           section("### `[commands]`", commands_recipe(),
                   row(before_run_word, "list of lists of text", "", "none", before_run_help));
}

}  // namespace halflsb
