#include "runner/config/question_plan.hpp"

#include <algorithm>

#include "runner/config/document.hpp"
#include "runner/config/resolved_plan.hpp"
#include "runner/config/toml_text.hpp"

namespace halflsb {
namespace {

TomlValue of_text(std::string text) {
    TomlValue value;
    value.kind = TomlValue::Kind::text;
    value.text = std::move(text);
    return value;
}

TomlValue of_number(double number) {
    TomlValue value;
    value.kind = TomlValue::Kind::real;
    value.real = number;
    return value;
}

TomlValue of_integer(std::int64_t integer) {
    TomlValue value;
    value.kind = TomlValue::Kind::integer;
    value.integer = integer;
    return value;
}

TomlValue list_of(std::vector<TomlValue> items) {
    TomlValue value;
    value.kind = TomlValue::Kind::array;
    value.items = std::move(items);
    return value;
}

void set(TomlValue& table, std::string key, TomlValue value) {
    std::erase_if(table.entries, [&](const TomlEntry& entry) { return entry.key == key; });
    table.entries.push_back({std::move(key), {}, std::move(value)});
}

/// Words of stimuli that hold numbers, texts and stimuli.
TomlValue table_of(const StimulusWords& words) {
    TomlValue table;
    set(table, "shape", of_text(words.shape));
    for (const auto& [name, value] : words.values.all()) {
        if (const auto* integer = std::get_if<std::int64_t>(&value)) {
            set(table, name, of_integer(*integer));
        } else if (const auto* real = std::get_if<double>(&value)) {
            set(table, name, of_number(*real));
        } else if (const auto* text = std::get_if<std::string>(&value)) {
            set(table, name, of_text(*text));
        } else {
            std::vector<TomlValue> parts;
            for (const StimulusWords& inner : words.values.stimuli(name)) {
                parts.push_back(table_of(inner));
                parts.back().is_inline = true;
            }
            set(table, name, list_of(std::move(parts)));
        }
    }
    return table;
}

/// Wider than any response: what comes back is recorded, and no figure of it can fail.
constexpr double no_error_beyond_ratio = 2.0;

TomlValue rule(bool has_twin) {
    TomlValue table;
    set(table, "kind", of_text(has_twin ? "exact" : "error"));
    if (!has_twin) set(table, "max_ratio", of_number(no_error_beyond_ratio));
    return table;
}

TomlValue case_of(const QuestionCase& question) {
    TomlValue table;
    set(table, "name", of_text(question.name));
    set(table, "purpose", of_text(question.purpose));
    set(table, "stimulus", table_of(question.stimulus));
    return table;
}

}  // namespace

std::variant<std::string, ReadProblems> question_plan(const std::string& path, const Files& files,
                                                      const PlanOptions& options,
                                                      const std::vector<QuestionCase>& cases, bool has_twin,
                                                      bool first_flushes) {
    auto text = resolved_plan(path, files, options);
    if (auto* problems = std::get_if<ReadProblems>(&text)) return std::move(*problems);
    const SourceText source(path, std::get<std::string>(text));
    auto parsed = parse_document(source, "docs/plan.md");
    if (auto* problem = std::get_if<std::string>(&parsed)) return ReadProblems{{std::move(*problem)}};
    TomlValue tree = std::get<TomlValue>(std::move(parsed));
    set(tree, "title", of_text("questions of halflsb explain"));
    set(tree, "stream", of_text("whole"));
    set(tree, "rule", list_of({rule(has_twin)}));
    std::vector<TomlValue> tables;
    for (const QuestionCase& question : cases) tables.push_back(case_of(question));
    if (first_flushes && !tables.empty()) set(tables.front(), "start", of_text("flush"));
    set(tree, "case", list_of(std::move(tables)));
    return toml_table(tree, "", {"filter", "rule", "case"});
}

}  // namespace halflsb
