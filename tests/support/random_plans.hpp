// Random plans out of the tables that the reader walks: a word that is added to a table is in them by itself.
//
// A plan is built part by part, and a part whose words do not go together (both level_ratio and level_codes) is
// thinned out until the reader takes it. So the words that occur are counted by their user: a reader that refused
// one always would show as a word that no plan has.
#pragma once

#include <algorithm>
#include <array>
#include <cmath>
#include <functional>
#include <random>
#include <set>
#include <string>
#include <vector>

#include "oracle/rules/rule.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/config/plan_words.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/stimulus.hpp"
#include "tests/support/fake_files.hpp"

namespace halflsb::random_plans {

struct Key {
    std::string name, value;
    const Parameter* parameter = nullptr;  ///< none of shape, kind and of words that are in no table
    bool is_required = false;
};

struct Table {
    std::string header;              ///< "[signal]"; "" at the top
    const Recipe* recipe = nullptr;  ///< none where the words are the author's
    std::vector<Key> keys;
};

struct RandomPlan {
    std::vector<Table> tables;  ///< the top first
    FakeFiles files;            ///< what the plan names, beside it

    std::string text() const {
        std::string all;
        for (const Table& table : tables) {
            if (!table.header.empty()) all += table.header + "\n";
            for (const Key& key : table.keys) all += key.name + " = " + key.value + "\n";
        }
        return all;
    }
    /// Of a key, or of the header with key = npos; counts from 1.
    int line_of(std::size_t table, std::size_t key) const {
        int line = 0;
        for (std::size_t t = 0; t < table; ++t)
            line += static_cast<int>(tables[t].keys.size()) + (tables[t].header.empty() ? 0 : 1);
        if (!tables[table].header.empty()) ++line;
        return key == std::string::npos ? std::max(1, line) : line + static_cast<int>(key) + 1;
    }
};

inline bool is_taken(const RandomPlan& plan) {
    FakeFiles files = plan.files;
    files.contents["plan.toml"] = plan.text();
    return std::holds_alternative<Plan>(read_plan("plan.toml", files));
}

class Generator {
public:
    explicit Generator(std::uint32_t seed) : random_(seed) {}

    std::size_t below(std::size_t n) { return n < 2 ? 0 : static_cast<std::size_t>(random_()) % n; }
    bool chance(int percent) { return below(100) < static_cast<std::size_t>(percent); }

    RandomPlan plan() {
        files_ = {};
        Table top{"", &plan_recipe(), {}};
        add_keys(top, [this](const Parameter& p) { return p.required || chance(25); });
        base_ = {{top}, {}};
        base_.tables.push_back(signal());
        add_filters();
        RandomPlan plan = base_;
        // Most are small: the reader's time is that of its cases.
        const std::size_t cases = chance(8) ? 1 + below(8) : 1 + below(2);
        for (std::size_t i = 0; i < cases; ++i) {
            const std::vector<Table> tables = a_case(i);
            plan.tables.insert(plan.tables.end(), tables.begin(), tables.end());
        }
        plan.files = files_;
        if (chance(40)) add_common_rule(plan);
        if (chance(30)) include_filters(plan);
        return plan;
    }

private:
    double real_between(double low, double high) {
        const double value = low + (high - low) * static_cast<double>(below(10001)) / 10000.0;
        return std::round(value * 1e6) / 1e6;
    }

    static std::string toml_real(double value) {
        const std::string text = number_text(value);
        return text.find_first_of(".e") == std::string::npos ? text + ".0" : text;
    }

    double number_for(const Parameter& parameter) {
        double low = parameter.minimum, high = parameter.maximum;
        const std::string name(parameter.name);
        if (parameter.unit == "Hz" && parameter.type != ParameterType::integer) {
            low = std::max(low, name == "rate_hz" ? 1000.0 : 10.0);
            high = std::min(high, name == "rate_hz" ? 48000.0 : 400.0);
        } else if (parameter.unit == "s") {
            low = std::max(low, 0.001);
            high = std::min(high, 0.05);
        } else if (name == "length_samples") {
            low = std::max(low, 64.0);
            high = std::min(high, 512.0);
        } else {
            if (!std::isfinite(low)) low = std::isfinite(high) ? high - 20.0 : -10.0;
            // Small numbers go together with more than large ones.
            high = std::min({high, low + 20.0});
        }
        return parameter.type == ParameterType::integer ? std::floor(real_between(low, high + 0.999999) + 1e-9)
                                                        : real_between(low, high);
    }

    std::string integer_for(const Parameter& parameter) {
        // Of the five numbers that a file of coefficients has here.
        if (parameter.name == "file_count") return parameter.unit == "taps" ? "5" : "1";
        if (parameter.name.starts_with("file_padding")) return chance(50) ? "0" : "1";
        double number = number_for(parameter);
        number = std::min(std::max(number, parameter.minimum), parameter.maximum);
        return std::to_string(static_cast<std::int64_t>(number));
    }

    std::string text() {
        static const std::array<const char*, 7> words = {"belt",
                                                         "tare",
                                                         "CW-7",
                                                         "\xC3\xBC"
                                                         "berlast",
                                                         "\\\"raw\\\"",
                                                         "C:\\\\data",
                                                         "2 kg"};
        return "\"" + std::string(words[below(words.size())]) + " " + std::to_string(below(1000)) + "\"";
    }

    std::string list(std::size_t count, const std::function<std::string()>& item) {
        std::string text;
        for (std::size_t i = 0; i < count; ++i) text += (i > 0 ? ", " : "") + item();
        return "[" + text + "]";
    }

    std::string file(const std::string& content, const std::string& ending) {
        const std::string name = "file" + std::to_string(files_.contents.size()) + ending;
        files_.contents["./" + name] = content;
        return "\"" + name + "\"";
    }

    std::string band() {
        const double from = real_between(10.0, 200.0);
        return "{ from_hz = " + toml_real(from) + ", to_hz = " + toml_real(from + real_between(0.0, 200.0)) +
               ", min_db = " + toml_real(-real_between(1.0, 90.0)) + (chance(50) ? ", max_db = 1 }" : " }");
    }

    std::string section() {
        std::string text = "[";
        for (const double reach : {1.0, 1.0, 1.0, 0.5, 0.4}) text += toml_real(real_between(-reach, reach)) + ", ";
        return text.substr(0, text.size() - 2) + "]";
    }

    /// A stimulus in braces, of a shape without stimuli in it.
    std::string inner_stimulus() {
        for (;;) {
            const Recipe& shape = stimulus_recipes()[below(stimulus_recipes().size())];
            const bool is_plain =
                std::none_of(shape.parameters.begin(), shape.parameters.end(),
                             [](const Parameter& p) { return p.required && p.type == ParameterType::stimuli; });
            if (!is_plain) continue;
            std::string text = "{ shape = \"" + std::string(shape.name) + "\"";
            for (const Parameter& parameter : shape.parameters) {
                if (parameter.required) text += ", " + std::string(parameter.name) + " = " + value_for(parameter);
            }
            return text + " }";
        }
    }

    std::string value_for(const Parameter& parameter) {
        switch (parameter.type) {
            case ParameterType::integer:
                return integer_for(parameter);
            case ParameterType::real:
                return toml_real(number_for(parameter));
            case ParameterType::text:
                if (parameter.name == "file_array") return "\"h\"";
                if (parameter.name == "signs") return "\"++-0+\"";
                if (parameter.name == "file_layout") return "\"b0 b1 b2 a1 a2\"";
                return text();
            case ParameterType::choice:
                // A flush that never ends is found out only after 2^24 samples: seldom asked for.
                if (parameter.name == "start" && chance(80)) return "\"reset\"";
                return "\"" + std::string(parameter.choices[below(parameter.choices.size())]) + "\"";
            case ParameterType::reals:
                return list(1 + below(5), [&] { return toml_real(number_for(parameter)); });
            case ParameterType::sections:
                return list(1 + below(3), [&] { return section(); });
            case ParameterType::bands:
                return list(1, [&] { return band(); });
            case ParameterType::file: {
                const std::string five = chance(50) ? "0.5, 0.25, 0.25, -0.5, 0.25" : "1, 0, 0, 0.5, 0";
                return chance(50) ? file("double h[] = {" + five + "};\n", ".h") : file(five + "\n", ".txt");
            }
            case ParameterType::integers:
                return "[1]";
            case ParameterType::signal_file:
                return file("code\n0\n5\n-7\n100\n", ".csv");
            case ParameterType::mask_file:
                return file("from_hz,to_hz,min_db,max_db\n0,0.5,-20,20\n", ".csv");
            case ParameterType::stimuli:
                return list(1 + below(2), [&] { return inner_stimulus(); });
        }
        return "0";
    }

    template <class Wanted>
    void add_keys(Table& table, Wanted wanted) {
        for (const Parameter& parameter : table.recipe->parameters) {
            if (wanted(parameter))
                table.keys.push_back(
                    {std::string(parameter.name), value_for(parameter), &parameter, parameter.required});
        }
    }

    /// Words about a file of coefficients need the file, which takes the place of the coefficients.
    void add_named_file(Table& table) {
        const auto is_about_file = [](const Key& key) { return key.name.starts_with("file_"); };
        if (std::none_of(table.keys.begin(), table.keys.end(), is_about_file)) return;
        for (const std::string what : {"taps", "sections"}) {
            const Parameter* parameter = find_parameter(*table.recipe, what + "_file");
            if (parameter == nullptr) continue;
            std::erase_if(table.keys, [&](const Key& key) { return key.name == what || key.name == what + "_file"; });
            table.keys.push_back({what + "_file", value_for(*parameter), parameter, false});
        }
    }

    /// Words about a limit of a response need the limit, and some a fitting other word.
    void add_response_limits(Table& table) {
        if (table.recipe == nullptr || table.recipe->name != "response") return;
        const auto has = [&](std::string_view name) {
            return std::any_of(table.keys.begin(), table.keys.end(), [&](const Key& key) { return key.name == name; });
        };
        const auto drop = [&](std::string_view name) {
            std::erase_if(table.keys, [&](const Key& key) { return key.name == name; });
        };
        const auto put = [&](const std::string& name, const std::string& value) {
            drop(name);
            table.keys.push_back({name, value, find_parameter(*table.recipe, name), false});
        };
        if (has("tolerance_db") || has("reference_hz") || has("reference_db")) {
            for (const char* other : {"mask_file", "mid_hz", "relative_to"}) drop(other);
            put("mask", "\"k-weighting\"");
            put("tolerance_db", "1.5");
            put("reference_hz", "100.0");
        } else if (has("mid_hz")) {
            for (const char* other : {"mask_file", "relative_to"}) drop(other);
            put("mask", "\"octave class 2\"");
            put("mid_hz", "100.0");
        } else if (has("mask")) {
            for (const char* other : {"mask_file", "relative_to"}) drop(other);
            put("mask", "\"c-weighting class 1\"");
        }
        if (has("min_group_delay_samples")) {
            put("phase_relative_to", "\"absolute\"");
            put("min_group_delay_samples", "-5.5");
            put("max_group_delay_samples", "50.0");
        } else if (has("max_group_delay_samples")) {
            put("max_group_delay_samples", "0.5");
        }
        if (has("phase_from_hz") || has("phase_to_hz")) {
            put("phase_from_hz", "10.0");
            put("phase_to_hz", "100.0");
            drop("passband_db");
        }
        const bool is_about_phase = std::any_of(table.keys.begin(), table.keys.end(), [](const Key& key) {
            return key.name.starts_with("phase_") || key.name == "passband_db" || key.name == "delta_deg" ||
                   key.name == "delta_samples";
        });
        if (is_about_phase && !has("max_group_delay_samples")) put("max_phase_deg", "10.0");
        if (!has("mask") && !has("mask_file") && !has("bands") && (has("relative_to") || !is_about_phase))
            put("bands", list(1, [&] { return band(); }));
    }

    /// Of a deadline: one word of a percentile needs the other.
    static void add_percentile(Table& table) {
        if (table.recipe == nullptr || table.recipe->name != "deadline") return;
        const auto is_of_it = [](const Key& key) {
            return key.name == "percentile" || key.name == "max_percentile_ticks";
        };
        if (std::none_of(table.keys.begin(), table.keys.end(), is_of_it)) return;
        std::erase_if(table.keys, is_of_it);
        for (const char* name : {"percentile", "max_percentile_ticks"})
            table.keys.push_back({name, "1.0", find_parameter(*table.recipe, name), false});
    }

    /// Not headroom: what of a stimulus can answer it hangs on every word of the filter, and finding out costs too much
    /// for thousands of plans. The standard set has it, and headroom_judge_test its words.
    const Recipe& drawn_rule() {
        for (;;) {
            const Recipe& kind = rule_recipes()[below(rule_recipes().size())];
            if (kind.name != "headroom") return kind;
        }
    }

    /// A stimulus that can answer rules which ask for much.
    void suit(Table& stimulus, const Recipe& kind) const {
        if (kind.name != "crosstalk") return;
        stimulus = chosen("[case.stimulus]", "shape", *find_recipe(stimulus_recipes(), "noise"));
        stimulus.keys.push_back({"length_samples", "4096", find_parameter(*stimulus.recipe, "length_samples"), true});
        stimulus.keys.push_back({"channel", "1", find_parameter(case_stimulus_recipe(), "channel"), false});
    }

    /// The table with its required words and some of the others, thinned out until `taken` takes it. False when
    /// even one of the others does not do.
    template <class Taken>
    bool settle(Table& table, Taken taken) {
        Table base = table;
        add_keys(base, [](const Parameter& p) { return p.required; });
        std::vector<Key> others;
        {
            Table all = table;
            all.keys.clear();
            add_keys(all, [](const Parameter& p) { return !p.required; });
            others = std::move(all.keys);
            std::shuffle(others.begin(), others.end(), random_);
        }
        for (std::size_t count = below(std::min<std::size_t>(others.size(), 5) + 1); count > 0; count /= 2) {
            table = base;
            table.keys.insert(table.keys.end(), others.begin(), others.begin() + static_cast<std::ptrdiff_t>(count));
            add_named_file(table);
            add_response_limits(table);
            add_percentile(table);
            if (taken(table)) return true;
        }
        table = base;
        if (taken(table)) return true;
        for (const Key& key : others) {
            table = base;
            table.keys.push_back(key);
            add_named_file(table);
            add_response_limits(table);
            add_percentile(table);
            if (taken(table)) return true;
        }
        return false;
    }

    /// `base_` with these tables behind it.
    bool goes(std::vector<Table> tables) {
        RandomPlan plan = base_;
        plan.tables.insert(plan.tables.end(), tables.begin(), tables.end());
        plan.files = files_;
        return is_taken(plan);
    }

    std::vector<Table> plain_rest() const {
        const Table filter{"[[filter]]", nullptr, {{"kind", "\"moving-average\""}, {"points", "4"}}};
        const Table rule{"[[rule]]", nullptr, {{"kind", "\"unchanged\""}}};
        const Table one{
            "[[case]]", nullptr, {{"name", "\"plain\""}, {"stimulus", "{ shape = \"step\", length_samples = 64 }"}}};
        return {filter, rule, one};
    }

    Table signal() {
        for (int attempt = 0; attempt < 20; ++attempt) {
            Table table{"[signal]", &signal_recipe(), {}};
            const bool is_good = settle(table, [&](const Table& tried) {
                std::vector<Table> tables = plain_rest();
                tables.insert(tables.begin(), tried);
                return goes(tables);
            });
            if (is_good) return table;
        }
        const auto word = [](const char* name, const char* value) {
            return Key{name, value, find_parameter(signal_recipe(), name), true};
        };
        return {"[signal]",
                &signal_recipe(),
                {word("rate_hz", "8000"), word("input", "\"q15\""), word("output", "\"q15\"")}};
    }

    static Table chosen(const std::string& header, const char* key, const Recipe& recipe) {
        return {header, &recipe, {{key, "\"" + std::string(recipe.name) + "\"", nullptr, true}}};
    }

    void add_filters() {
        is_unknown_ = false;
        const std::size_t stages = 1 + below(2);
        for (std::size_t i = 0; i < stages && !is_unknown_; ++i) {
            for (int attempt = 0; attempt < 20; ++attempt) {
                const Recipe& kind = filter_recipes()[below(filter_recipes().size())];
                const bool unknown = kind.name == unknown_kind;
                if (unknown && i > 0) continue;
                Table table = chosen("[[filter]]", "kind", kind);
                std::vector<Table> rest = plain_rest();
                rest.erase(rest.begin());
                const auto taken = [&](const Table& tried) {
                    std::vector<Table> tables = rest;
                    tables.insert(tables.begin(), tried);
                    return goes(tables);
                };
                if (!settle(table, taken)) continue;
                base_.tables.push_back(table);
                is_unknown_ = unknown;
                if (!unknown && chance(30)) {
                    Table arithmetic{"[filter.arithmetic]", &arithmetic_recipe(), {}};
                    if (settle(arithmetic, taken)) base_.tables.push_back(arithmetic);
                }
                break;
            }
        }
        if (base_.tables.back().header == "[signal]") base_.tables.push_back(plain_rest().front());
    }

    std::vector<Table> a_case(std::size_t index) {
        for (int attempt = 0; attempt < 30; ++attempt) {
            const std::string name = "\"case " + std::to_string(index) + "\"";
            Table head{"[[case]]", &case_recipe(), {{"name", name, find_parameter(case_recipe(), "name"), true}}};
            const Recipe& shape = stimulus_recipes()[below(stimulus_recipes().size())];
            Table stimulus = chosen("[case.stimulus]", "shape", shape);
            Table rule{"[[case.rule]]", nullptr, {{"kind", "\"unchanged\""}}};
            if (!settle(stimulus, [&](const Table& tried) { return goes({head, tried, rule}); })) continue;
            const Recipe& kind = drawn_rule();
            rule = chosen("[[case.rule]]", "kind", kind);
            suit(stimulus, kind);
            if (!settle(rule, [&](const Table& tried) { return goes({head, stimulus, tried}); })) continue;
            add_case_words(head, stimulus, rule);
            std::vector<Table> tables{head, stimulus};
            if (chance(30)) {
                tables.push_back({"[case.settings]", nullptr, {{"gain", std::to_string(below(9))}}});
                tables.back().keys.push_back({"\"notch off\"", "-1"});
            }
            tables.push_back(rule);
            if (chance(35)) add_each(tables);
            return tables;
        }
        return {{"[[case]]", &case_recipe(), {{"name", "\"case " + std::to_string(index) + "\""}}},
                {"[case.stimulus]",
                 find_recipe(stimulus_recipes(), "step"),
                 {{"shape", "\"step\"", nullptr, true}, {"length_samples", "64", nullptr, true}}},
                {"[[case.rule]]", nullptr, {{"kind", "\"unchanged\"", nullptr, true}}}};
    }

    void add_case_words(Table& head, Table& stimulus, const Table& rule) {
        for (const auto& [table, recipe] :
             {std::pair{&head, &case_recipe()}, std::pair{&stimulus, &case_stimulus_recipe()}}) {
            Table with = *table;
            for (const Parameter& parameter : recipe->parameters) {
                if (parameter.name == "name" || !chance(40)) continue;
                with.keys.push_back({std::string(parameter.name), value_for(parameter), &parameter, false});
            }
            Table kept = *table;
            *table = with;
            if (!goes({head, stimulus, rule})) *table = std::move(kept);
        }
        if (chance(40))
            head.keys.push_back({std::string(labels_word), chance(50) ? "[\"quick\"]" : "[\"a-b\", \"x_1\"]"});
    }

    /// A word of the stimulus becomes a list of values.
    void add_each(std::vector<Table>& tables) {
        Table& stimulus = tables[1];
        for (std::size_t i = 1; i < stimulus.keys.size(); ++i) {
            const Key key = stimulus.keys[i];
            if (key.parameter == nullptr ||
                (key.parameter->type != ParameterType::integer && key.parameter->type != ParameterType::real))
                continue;
            std::vector<Table> tried = tables;
            tried[1].keys.erase(tried[1].keys.begin() + static_cast<std::ptrdiff_t>(i));
            std::set<std::string> values{key.value};
            for (std::size_t n = below(3); n > 0; --n) values.insert(value_for(*key.parameter));
            std::string list;
            if (chance(50)) {
                for (const std::string& value : values) list += (list.empty() ? "" : ", ") + value;
            } else {
                for (const std::string& value : values)
                    list += std::string(list.empty() ? "" : ", ") + "{ name = \"n" + value + "\", \"stimulus." +
                            key.name + "\" = " + value + " }";
            }
            tried.insert(tried.end() - 1,
                         {"[case.each]", nullptr, {{"\"stimulus." + key.name + "\"", "[" + list + "]"}}});
            if (!goes(tried)) continue;
            tables = std::move(tried);
            return;
        }
    }

    void add_common_rule(RandomPlan& plan) {
        const Recipe& kind = drawn_rule();
        Table rule = chosen("[[rule]]", "kind", kind);
        const auto first_case = [](std::vector<Table>& tables) {
            return std::find_if(tables.begin(), tables.end(), [](const Table& t) { return t.header == "[[case]]"; });
        };
        const auto taken = [&](const Table& tried) {
            RandomPlan with = plan;
            with.tables.insert(first_case(with.tables), tried);
            return is_taken(with);
        };
        if (settle(rule, taken)) plan.tables.insert(first_case(plan.tables), rule);
    }

    /// The filters move to a file of their own.
    void include_filters(RandomPlan& plan) {
        RandomPlan with = plan, shared;
        const auto is_filter = [](const Table& t) {
            return t.header.starts_with("[[filter]]") || t.header.starts_with("[filter.");
        };
        std::copy_if(plan.tables.begin(), plan.tables.end(), std::back_inserter(shared.tables), is_filter);
        std::erase_if(with.tables, is_filter);
        with.files.contents["./shared/filters.toml"] = shared.text();
        with.tables.front().keys.push_back({"include", "[\"shared/filters.toml\"]"});
        plan = std::move(with);
    }

    std::mt19937 random_;
    FakeFiles files_;
    RandomPlan base_;
    bool is_unknown_ = false;
};

}  // namespace halflsb::random_plans
