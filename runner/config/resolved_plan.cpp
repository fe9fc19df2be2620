#include "runner/config/resolved_plan.hpp"

#include <algorithm>
#include <array>
#include <cmath>
#include <deque>
#include <functional>

#include "runner/config/document.hpp"
#include "runner/config/plan_each.hpp"
#include "runner/config/plan_reader.hpp"
#include "runner/config/plan_tree.hpp"
#include "runner/config/plan_words.hpp"
#include "runner/config/standard_set.hpp"
#include "runner/config/toml_text.hpp"

namespace halflsb {

namespace {

/// A default that could stand in a table of the tree.
struct Missing {
    std::vector<std::size_t> path;  ///< from the tried table: of a table the entry, of an array the item
    TomlEntry entry;
};

std::optional<TomlValue> default_of(const Parameter& parameter) {
    TomlValue value;
    if (parameter.default_value && parameter.type == ParameterType::integer) {
        value.kind = TomlValue::Kind::integer;
        value.integer = static_cast<std::int64_t>(std::llround(*parameter.default_value));
    } else if (parameter.default_value) {
        value.kind = TomlValue::Kind::real;
        value.real = *parameter.default_value;
    } else if (parameter.type == ParameterType::choice && !parameter.required && !parameter.optional_choice &&
               !parameter.choices.empty()) {
        value.kind = TomlValue::Kind::text;
        value.text = parameter.choices.front();
    } else {
        return std::nullopt;
    }
    return value;
}

const Recipe* recipe_of(const TomlValue& table, std::string_view key, const std::vector<Recipe>& recipes) {
    const TomlEntry* word = table.find(key);
    return word == nullptr ? nullptr : find_recipe(recipes, word->value.text);
}

/// What the recipe would add to a table, those of stimuli inside it included.
void gather(const TomlValue& table, const Recipe& recipe, const std::vector<std::size_t>& path,
            std::vector<Missing>& missing) {
    for (const Parameter& parameter : recipe.parameters) {
        const TomlEntry* given = table.find(parameter.name);
        if (given == nullptr) {
            if (auto value = default_of(parameter))
                missing.push_back({path, {std::string(parameter.name), {}, std::move(*value)}});
            continue;
        }
        if (parameter.type != ParameterType::stimuli) continue;
        for (std::size_t i = 0; i < given->value.items.size(); ++i) {
            const Recipe* inner = recipe_of(given->value.items[i], "shape", stimulus_recipes());
            std::vector<std::size_t> inner_path = path;
            inner_path.push_back(static_cast<std::size_t>(given - table.entries.data()));
            inner_path.push_back(i);
            if (inner != nullptr) gather(given->value.items[i], *inner, inner_path, missing);
        }
    }
}

/// Additions go to the end of their tables, so the paths of others stay.
void add(TomlValue& table, const Missing& missing) {
    TomlValue* at = &table;
    for (const std::size_t step : missing.path)
        at = at->kind == TomlValue::Kind::table ? &at->entries[step].value : &at->items[step];
    at->entries.push_back(missing.entry);
}

using IsTaken = std::function<bool(const TomlValue&)>;

/// With all defaults that are taken beside what the table says: at once where it can be, else one by one.
TomlValue filled(const TomlValue& table, const std::vector<Missing>& missing, const IsTaken& is_taken) {
    TomlValue all = table;
    for (const Missing& one : missing) add(all, one);
    if (missing.empty() || is_taken(all)) return all;
    TomlValue best = table;
    for (const Missing& one : missing) {
        TomlValue tried = best;
        add(tried, one);
        if (is_taken(tried)) best = std::move(tried);
    }
    return best;
}

std::vector<std::size_t> path_to(const TomlValue& table, std::string_view key) {
    const TomlEntry* entry = table.find(key);
    return {static_cast<std::size_t>(entry - table.entries.data())};
}

/// In the order of docs/plan.md: what others refer to comes first.
std::size_t rank(const TomlEntry& entry) {
    constexpr std::array<std::string_view, 5> order = {"signal", "arithmetic", "filter", "rule", "case"};
    const auto found = std::find(order.begin(), order.end(), entry.key);
    return found == order.end() ? 0 : static_cast<std::size_t>(found - order.begin()) + 1;
}

class ResolvedPlan {
public:
    ResolvedPlan(Document document, const Files& files, const PlanOptions& options, std::string root)
        : document_(std::move(document)), options_(options), problems_(document_.source), context_{problems_,
                                                                                                   files,
                                                                                                   std::move(root),
                                                                                                   std::nullopt,
                                                                                                   {},
                                                                                                   {}} {}
    ResolvedPlan(const ResolvedPlan&) = delete;
    ResolvedPlan& operator=(const ResolvedPlan&) = delete;

    /// Of a plan that read_plan takes, which made `plan` of it.
    std::string text(const Plan& plan) {
        join_includes(document_, context_, included_);
        TomlValue& tree = document_.tree;
        std::stable_sort(tree.entries.begin(), tree.entries.end(),
                         [](const TomlEntry& a, const TomlEntry& b) { return rank(a) < rank(b); });
        fill_top();
        fill_filters();
        add_standard_set(plan);
        fill_rules();
        expand_cases();
        return toml_table(tree, "", {"filter", "rule", "case"});
    }

private:
    /// A part of the plan is read with the tree as it would be, and its problems counted.
    bool is_taken(const TomlValue& tree, const std::function<void(ReadContext&, TableReader&)>& read) {
        Problems problems(document_.source);
        for (const SourceText& source : included_) problems.add_source(source, source.name());
        ReadContext tried{problems,
                          context_.files,
                          context_.root,
                          context_.nyquist_hz,
                          std::move(context_.parts),
                          std::move(context_.signal_files)};
        TableReader top(tried, tree, "");
        read(tried, top);
        context_.parts = std::move(tried.parts);
        context_.signal_files = std::move(tried.signal_files);
        return problems.count() == 0;
    }

    TomlValue* list(std::string_view key) {
        const TomlEntry* entry = document_.tree.find(key);
        return entry == nullptr ? nullptr : &document_.tree.entries[path_to(document_.tree, key).front()].value;
    }

    void fill_top() {
        std::vector<Missing> missing;
        TomlValue& tree = document_.tree;
        gather(tree, plan_recipe(), {}, missing);
        gather(tree.find("signal")->value, signal_recipe(), path_to(tree, "signal"), missing);
        if (const TomlEntry* arithmetic = tree.find("arithmetic"))
            gather(arithmetic->value, arithmetic_recipe(), path_to(tree, "arithmetic"), missing);
        const auto read = [](ReadContext& context, TableReader& top) {
            top.parameters(plan_recipe());
            const auto signal = read_signal(context, top);
            read_filters(context, top, signal ? &*signal : nullptr);
        };
        tree = filled(tree, missing, [&](const TomlValue& tried) { return is_taken(tried, read); });
        is_taken(tree, [&](ReadContext& context, TableReader& top) { signal_ = read_signal(context, top); });
        context_.nyquist_hz = signal_->rate_hz / 2.0;
    }

    void fill_filters() {
        std::vector<Missing> missing;
        TomlValue& tree = document_.tree;
        const std::size_t at = path_to(tree, "filter").front();
        const TomlValue& stages = tree.entries[at].value;
        for (std::size_t i = 0; i < stages.items.size(); ++i) {
            const TomlValue& stage = stages.items[i];
            if (const Recipe* recipe = recipe_of(stage, "kind", filter_recipes()))
                gather(stage, *recipe, {at, i}, missing);
            // What [arithmetic] says holds for a stage that does not say it: no default takes its place.
            const TomlEntry* own = stage.find("arithmetic");
            if (own == nullptr || tree.find("arithmetic") != nullptr) continue;
            gather(own->value, arithmetic_recipe(), {at, i, static_cast<std::size_t>(own - stage.entries.data())},
                   missing);
        }
        tree = filled(tree, missing, [&](const TomlValue& tried) {
            return is_taken(tried,
                            [&](ReadContext& context, TableReader& top) { read_filters(context, top, &*signal_); });
        });
        is_taken(tree,
                 [&](ReadContext& context, TableReader& top) { filters_ = read_filters(context, top, &*signal_); });
        facts_ = {&*signal_, &*filters_};
    }

    void add_standard_set(const Plan& plan) {
        if (!plan.cases.front().is_standard) return;
        const SourceText& source =
            included_.emplace_back(std::string(standard_set_name), standard_set_text(*signal_, *filters_));
        const int index = problems_.add_source(source, std::string(standard_set_name));
        auto set = parse_document(source, "docs/plan.md", index);
        if (auto* tree = std::get_if<TomlValue>(&set))
            put_standard_cases(document_.tree, std::move(*tree), plan, context_);
    }

    void fill_rules() {
        TomlValue& tree = document_.tree;
        if (tree.find("rule") == nullptr) return;
        std::vector<Missing> missing;
        gather_rules(tree, missing);
        tree = filled(tree, missing, [&](const TomlValue& tried) {
            return is_taken(tried, [&](ReadContext& context, TableReader& top) { read_rules(context, top, facts_); });
        });
    }

    static void gather_rules(const TomlValue& outer, std::vector<Missing>& missing) {
        const TomlEntry* rules = outer.find("rule");
        if (rules == nullptr) return;
        const std::size_t at = path_to(outer, "rule").front();
        for (std::size_t i = 0; i < rules->value.items.size(); ++i) {
            const TomlValue& rule = rules->value.items[i];
            if (const Recipe* recipe = recipe_of(rule, "kind", rule_recipes())) gather(rule, *recipe, {at, i}, missing);
        }
    }

    void expand_cases() {
        TomlValue* cases = list("case");
        std::vector<TomlValue> expanded;
        for (const TomlValue& table : cases->items) {
            const CaseExpansion expansion(table, problems_);
            for (std::size_t i = 0; i < static_cast<std::size_t>(expansion.count()); ++i)
                expanded.push_back(filled_case(*expansion.at(i, problems_)));
        }
        cases->items = std::move(expanded);
    }

    TomlValue filled_case(TomlValue table) {
        if (options_.seed) {
            for (TomlEntry& entry : table.entries) {
                if (entry.key == "stimulus") put_seed(entry.value, *options_.seed);
            }
        }
        // Defaults first, so that the keys of a case stand before its tables.
        std::vector<Missing> missing;
        gather(table, case_recipe(), {}, missing);
        const TomlValue& stimulus = table.find("stimulus")->value;
        const std::vector<std::size_t> at = path_to(table, "stimulus");
        gather(stimulus, case_stimulus_recipe(), at, missing);
        if (const Recipe* shape = recipe_of(stimulus, "shape", stimulus_recipes()))
            gather(stimulus, *shape, at, missing);
        gather_rules(table, missing);
        return filled(table, missing, [&](const TomlValue& tried) {
            return is_taken(document_.tree, [&](ReadContext& context, TableReader& top) {
                read_case(context, tried, top, facts_, std::nullopt);
            });
        });
    }

    /// --seed: of every stimulus that has one, those inside included.
    static void put_seed(TomlValue& stimulus, std::uint64_t seed) {
        const Recipe* recipe = recipe_of(stimulus, "shape", stimulus_recipes());
        if (recipe == nullptr) return;
        if (find_parameter(*recipe, "seed") != nullptr) {
            std::erase_if(stimulus.entries, [](const TomlEntry& entry) { return entry.key == "seed"; });
            TomlValue value;
            value.kind = TomlValue::Kind::integer;
            value.integer = static_cast<std::int64_t>(seed);
            stimulus.entries.push_back({"seed", {}, std::move(value)});
        }
        for (TomlEntry& entry : stimulus.entries) {
            const Parameter* parameter = find_parameter(*recipe, entry.key);
            if (parameter == nullptr || parameter->type != ParameterType::stimuli) continue;
            for (TomlValue& item : entry.value.items) put_seed(item, seed);
        }
    }

    Document document_;
    std::deque<SourceText> included_;
    PlanOptions options_;
    Problems problems_;
    ReadContext context_;
    std::optional<Signal> signal_;
    std::optional<PlanFilters> filters_;
    PlanFacts facts_;
};

}  // namespace

std::variant<std::string, ReadProblems> resolved_plan(const std::string& path, const Files& files,
                                                      const PlanOptions& options) {
    auto plan = read_plan(path, files, options);
    if (auto* problems = std::get_if<ReadProblems>(&plan)) return std::move(*problems);
    auto document = open_document(path, files, "docs/plan.md");
    if (auto* problems = std::get_if<ReadProblems>(&document)) return std::move(*problems);
    const std::string root = options.root.empty() ? folder_of(path) : options.root;
    return ResolvedPlan(std::get<Document>(std::move(document)), files, options, root).text(std::get<Plan>(plan));
}

}  // namespace halflsb
