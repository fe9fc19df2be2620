#include "runner/config/plan_each.hpp"

#include <algorithm>
#include <cmath>
#include <map>

#include "runner/config/plan_words.hpp"
#include "runner/world/printable.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::string_view list_remedy =
    "write a list, \"stimulus.level_ratio\" = [0.1, 0.5] for example; a single value belongs into the case itself";
constexpr std::string_view table_remedy = "write { name = \"slow\", rate_hz = 600.0 } for example";
constexpr std::size_t longest_list_label = 24;

/// "stimulus" and "level_ratio" of "stimulus.level_ratio"; the second is empty for a key of the case itself.
std::pair<std::string, std::string> split(const std::string& path) {
    const std::size_t dot = path.find('.');
    if (dot == std::string::npos) return {path, {}};
    return {path.substr(0, dot), path.substr(dot + 1)};
}

std::string last_part(const std::string& path) { return path.substr(path.rfind('.') + 1); }

/// How a value shows in the name of a case; "" when it has no short form.
std::string label_of(const TomlValue& value) {
    switch (value.kind) {
        case TomlValue::Kind::text:
            return printable(value.text);
        case TomlValue::Kind::integer:
            return std::to_string(value.integer);
        case TomlValue::Kind::real:
            return number_text(value.real);
        case TomlValue::Kind::boolean:
            return value.boolean ? "true" : "false";
        case TomlValue::Kind::array: {
            std::string text;
            for (const TomlValue& item : value.items) {
                const std::string label = label_of(item);
                if (label.empty()) return {};
                text += (text.empty() ? "[" : ", ") + label;
                if (text.size() >= longest_list_label) return {};
            }
            return text.empty() ? "[]" : text + "]";
        }
        default:
            return {};
    }
}

double count_values(const TomlValue& value) {
    double count = 1.0;
    for (const TomlValue& item : value.items) count += count_values(item);
    for (const TomlEntry& entry : value.entries) count += count_values(entry.value);
    return count;
}

const TomlEntry* find_path(const TomlValue& table, const std::string& path) {
    const auto [first, rest] = split(path);
    const TomlEntry* entry = table.find(first);
    if (entry == nullptr || rest.empty()) return entry;
    return entry->value.find(rest);
}

void put(TomlValue& table, const std::string& path, Place key_place, const TomlValue& value) {
    const auto [first, rest] = split(path);
    if (rest.empty()) {
        table.entries.push_back({first, key_place, value});
        return;
    }
    auto inner = std::find_if(table.entries.begin(), table.entries.end(),
                              [&, &name = first](const TomlEntry& entry) { return entry.key == name; });
    if (inner == table.entries.end()) {
        TomlValue made;
        made.place = table.place;
        inner = table.entries.insert(table.entries.end(), {first, key_place, std::move(made)});
    }
    inner->value.entries.push_back({rest, key_place, value});
}

/// What the name of a case may not exceed.
double longest_name() { return find_parameter(case_recipe(), "name")->maximum; }

}  // namespace

CaseExpansion::CaseExpansion(const TomlValue& case_table, Problems& problems)
    : table_(case_table), each_(case_table.find(each_word)) {
    if (each_ == nullptr) return;
    const TomlValue& each = each_->value;
    if (each.kind != TomlValue::Kind::table) {
        refuse(problems, each.place, "each is " + kind_text(each) + ", wanted one table",
               "write it under the header [case.each]");
        return;
    }
    read_keys(each, "", problems);
    // A dotted key makes a table, and its keys may stand apart.
    std::stable_sort(axes_.begin(), axes_.end(),
                     [](const Axis& a, const Axis& b) { return a.key_place < b.key_place; });
    if (is_clean_ && axes_.empty()) {
        refuse(problems, each.place, "[case.each] varies nothing", "give it a key with a list of values");
    }
    if (is_clean_) refuse_twice_set(problems);
}

void CaseExpansion::refuse(Problems& problems, Place place, std::string_view problem, std::string_view remedy) {
    problems.add(place, problem, remedy);
    is_clean_ = false;
}

void CaseExpansion::read_keys(const TomlValue& table, const std::string& prefix, Problems& problems) {
    for (const TomlEntry& entry : table.entries) {
        const std::string key = prefix + entry.key;
        const bool is_inner = entry.key == "stimulus" || entry.key == "settings";
        if (entry.value.kind == TomlValue::Kind::table && (is_inner || !entry.value.is_inline)) {
            read_keys(entry.value, key + ".", problems);
        } else {
            read_axis(key, entry, problems);
        }
    }
}

void CaseExpansion::read_axis(std::string key, const TomlEntry& entry, Problems& problems) {
    const TomlValue& list = entry.value;
    if (list.kind != TomlValue::Kind::array) {
        refuse(problems, list.place, printable(key) + " is " + kind_text(list) + ", wanted a list of values",
               list_remedy);
        return;
    }
    if (list.items.empty()) {
        refuse(problems, list.place, printable(key) + " has no values, so there would be no case",
               "give it at least one value");
        return;
    }
    Axis axis{std::move(key), entry.key_place, {}, {}};
    const auto is_table = [](const TomlValue& value) { return value.kind == TomlValue::Kind::table; };
    const bool sets_keys = is_table(list.items.front());
    for (const TomlValue& value : list.items) {
        if (is_table(value) != sets_keys) {
            refuse(problems, value.place, printable(axis.key) + " mixes plain values and tables",
                   "make all of its values plain, or all of them tables with a name");
            return;
        }
    }
    if (!sets_keys && !check_path({axis.key, axis.key_place, nullptr}, problems)) return;
    for (const TomlValue& value : list.items) read_choice(axis, value, sets_keys, problems);
    axes_.push_back(std::move(axis));
}

void CaseExpansion::read_choice(Axis& axis, const TomlValue& value, bool sets_keys, Problems& problems) {
    Choice choice{label_of(value), value.place, {}};
    if (sets_keys) {
        const TomlEntry* name = value.find("name");
        if (name == nullptr) {
            refuse(problems, value.place, "this value of " + printable(axis.key) + " has no name",
                   "a table of values has a name that stands for it in the names of the cases: " +
                       std::string(table_remedy));
            return;
        }
        if (name->value.kind != TomlValue::Kind::text || name->value.text.empty()) {
            refuse(problems, name->value.place, "the name of a value must be a string, not empty", table_remedy);
            return;
        }
        choice.label = printable(name->value.text);
        read_settings(choice, value, "", problems);
    } else {
        if (choice.label.empty()) choice.label = "#" + std::to_string(axis.choices.size() + 1);
        choice.settings.push_back({axis.key, axis.key_place, &value});
    }
    const auto [first, is_new] = axis.labels.emplace(choice.label, choice.place);
    if (!is_new) {
        const std::string what = printable(last_part(axis.key)) + " " + choice.label;
        refuse(problems, choice.place,
               quoted(what) + " is there twice, the other one in " + problems.line_text(first->second, choice.place) +
                   ", so two cases would have one name",
               "take one of the two out");
        return;
    }
    axis.choices.push_back(std::move(choice));
}

void CaseExpansion::read_settings(Choice& choice, const TomlValue& table, const std::string& prefix,
                                  Problems& problems) {
    for (const TomlEntry& entry : table.entries) {
        if (prefix.empty() && entry.key == "name") continue;
        const std::string path = prefix + entry.key;
        if (entry.value.kind == TomlValue::Kind::table) {
            read_settings(choice, entry.value, path + ".", problems);
            continue;
        }
        const Setting setting{path, entry.key_place, &entry.value};
        if (check_path(setting, problems)) choice.settings.push_back(setting);
    }
}

bool CaseExpansion::check_path(const Setting& setting, Problems& problems) {
    const auto [first, rest] = split(setting.path);
    const auto refused = [&](const std::string& problem, std::string_view remedy) {
        refuse(problems, setting.key_place, problem, remedy);
        return false;
    };
    if (first == "name") {
        return refused("the name of a case cannot vary by itself",
                       "leave it out here: what varies is put behind the name of the case");
    }
    for (const std::string_view fixed : {std::string_view("labels"), std::string_view("rule"), each_word}) {
        if (first == fixed)
            return refused(std::string(fixed) + " of a case cannot vary", "write another [[case]] with its own");
    }
    const bool is_inner = first == "stimulus" || first == "settings";
    const bool has_dot = setting.path.find('.') != std::string::npos;
    if (has_dot ? !is_inner || rest.empty() : is_inner || first.empty()) {
        return refused(quoted(setting.path) + " is no key of a case",
                       "vary a key of [[case]], or one of its stimulus or settings: \"stimulus.level_ratio\"");
    }
    return true;
}

void CaseExpansion::refuse_twice_set(Problems& problems) {
    struct Setter {
        const Axis* axis;
        const Choice* choice;
        Place key_place;
    };
    std::map<std::string, Setter> setters;
    for (const Axis& axis : axes_) {
        for (const Choice& choice : axis.choices) {
            for (const Setting& setting : choice.settings) {
                const auto tell = [&](Place other, std::string_view remedy) {
                    refuse(problems, setting.key_place,
                           quoted(setting.path) + " is set here and in " + problems.line_text(other, setting.key_place),
                           remedy);
                };
                if (const TomlEntry* above = find_path(table_, setting.path)) {
                    tell(above->key_place, "take it out of the case, or out of [case.each]");
                    continue;
                }
                const Setter& setter =
                    setters.emplace(setting.path, Setter{&axis, &choice, setting.key_place}).first->second;
                // The alternatives of one key set the same keys, each once.
                const bool is_other_key = setter.axis != &axis;
                const bool is_again = setter.choice == &choice && setter.key_place != setting.key_place;
                if (is_other_key || is_again) tell(setter.key_place, "let only one key of [case.each] set it");
            }
        }
    }
}

double CaseExpansion::count() const {
    double count = 1.0;
    for (const Axis& axis : axes_) count *= static_cast<double>(axis.choices.size());
    return count;
}

double CaseExpansion::value_count() const {
    double values = count_values(table_);
    if (each_ != nullptr) values -= count_values(each_->value);
    double all = values * count();
    for (const Axis& axis : axes_) {
        double of_axis = 0.0;
        for (const Choice& choice : axis.choices) {
            for (const Setting& setting : choice.settings) of_axis += count_values(*setting.value);
        }
        all += of_axis * count() / static_cast<double>(std::max<std::size_t>(1, axis.choices.size()));
    }
    return all;
}

Place CaseExpansion::place() const { return each_ == nullptr ? table_.place : each_->value.place; }

std::optional<TomlValue> CaseExpansion::at(std::size_t index, Problems& problems) const {
    TomlValue copy;
    copy.place = table_.place;
    copy.is_inline = table_.is_inline;
    for (const TomlEntry& entry : table_.entries) {
        if (&entry != each_) copy.entries.push_back(entry);
    }
    if (axes_.empty()) return copy;

    // The last key varies fastest: its digit is the lowest.
    std::vector<const Choice*> chosen(axes_.size());
    for (std::size_t i = axes_.size(); i-- > 0;) {
        chosen[i] = &axes_[i].choices[index % axes_[i].choices.size()];
        index /= axes_[i].choices.size();
    }
    std::string varied;
    for (std::size_t i = 0; i < axes_.size(); ++i) {
        varied += ", " + printable(last_part(axes_[i].key)) + " " + chosen[i]->label;
        for (const Setting& setting : chosen[i]->settings) put(copy, setting.path, setting.key_place, *setting.value);
    }
    for (TomlEntry& entry : copy.entries) {
        if (entry.key != "name" || entry.value.kind != TomlValue::Kind::text || entry.value.text.empty()) continue;
        entry.value.text += varied;
        const std::size_t length = columns_of(printable(entry.value.text));
        if (static_cast<double>(length) <= longest_name()) continue;
        problems.add(place(),
                     "an expanded case would be called " + quoted(entry.value.text) + ", " + std::to_string(length) +
                         " characters",
                     "give at most " + number_text(longest_name()) +
                         ": shorten the name of the case, or give long values a name: { name = \"slow\", ... }");
        return std::nullopt;
    }
    return copy;
}

bool has_too_many(const std::vector<CaseExpansion>& cases, std::size_t common_rules, Problems& problems) {
    // A judged rule weighs some ten values.
    const double rule_values = 10.0 * static_cast<double>(common_rules);
    double count = 0.0, values = 0.0;
    const CaseExpansion *first_beyond = nullptr, *first_large = nullptr;
    for (const CaseExpansion& expansion : cases) {
        count += expansion.count();
        values += expansion.value_count() + expansion.count() * rule_values;
        if (first_beyond == nullptr && count > static_cast<double>(most_cases)) first_beyond = &expansion;
        if (first_large == nullptr && values > static_cast<double>(most_case_values)) first_large = &expansion;
    }
    if (first_beyond != nullptr) {
        problems.add(first_beyond->place(),
                     "the plan has " + (std::isfinite(count) ? number_text(count) : "more than 1e308") +
                         " cases, the most are " + std::to_string(most_cases),
                     "vary fewer values in [case.each], or split the plan");
        return true;
    }
    if (first_large != nullptr) {
        problems.add(first_large->place(),
                     "the cases hold " + (std::isfinite(values) ? number_text(values) : "more than 1e308") +
                         " values, the most are " + std::to_string(most_case_values),
                     "keep long lists in a file beside the plan, or vary fewer values in [case.each]");
        return true;
    }
    return false;
}

}  // namespace halflsb
