#include "runner/config/plan_axes.hpp"

#include <algorithm>

#include "runner/config/plan_words.hpp"
#include "runner/world/printable.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::string_view list_remedy =
    "write a list, \"stimulus.level_ratio\" = [0.1, 0.5] for example; a single value belongs into the case itself";
constexpr std::string_view table_remedy = "write { name = \"slow\", rate_hz = 600.0 } for example";
constexpr std::size_t longest_list_label = 24;

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

const TomlEntry* find_path(const TomlValue& table, const std::string& path) {
    const auto [first, rest] = split_path(path);
    const TomlEntry* entry = table.find(first);
    if (entry == nullptr || rest.empty()) return entry;
    return entry->value.find(rest);
}

class AxisReader {
public:
    AxisReader(const TomlValue& case_table, Problems& problems) : table_(case_table), problems_(problems) {}

    EachAxes read(const TomlValue& each);

private:
    void read_keys(const TomlValue& table, const std::string& prefix);
    void read_axis(std::string key, const TomlEntry& entry);
    void read_choice(EachAxis& axis, const TomlValue& value, bool sets_keys);
    void read_settings(EachChoice& choice, const TomlValue& table, const std::string& prefix);
    bool check_path(const EachSetting& setting);
    void refuse_twice_set();
    void refuse(Place place, std::string_view problem, std::string_view remedy);

    const TomlValue& table_;
    Problems& problems_;
    EachAxes read_;
};

EachAxes AxisReader::read(const TomlValue& each) {
    if (each.kind != TomlValue::Kind::table) {
        refuse(each.place, "each is " + kind_text(each) + ", wanted one table",
               "write it under the header [case.each]");
        return std::move(read_);
    }
    read_keys(each, "");
    // A dotted key makes a table, and its keys may stand apart.
    std::stable_sort(read_.axes.begin(), read_.axes.end(),
                     [](const EachAxis& a, const EachAxis& b) { return a.key_place < b.key_place; });
    if (read_.is_clean && read_.axes.empty()) {
        refuse(each.place, "[case.each] varies nothing", "give it a key with a list of values");
    }
    if (read_.is_clean) refuse_twice_set();
    return std::move(read_);
}

void AxisReader::refuse(Place place, std::string_view problem, std::string_view remedy) {
    problems_.add(place, problem, remedy);
    read_.is_clean = false;
}

void AxisReader::read_keys(const TomlValue& table, const std::string& prefix) {
    for (const TomlEntry& entry : table.entries) {
        const std::string key = prefix + entry.key;
        const bool is_inner = entry.key == "stimulus" || entry.key == "settings";
        if (entry.value.kind == TomlValue::Kind::table && (is_inner || !entry.value.is_inline)) {
            read_keys(entry.value, key + ".");
        } else {
            read_axis(key, entry);
        }
    }
}

void AxisReader::read_axis(std::string key, const TomlEntry& entry) {
    const TomlValue& list = entry.value;
    if (list.kind != TomlValue::Kind::array) {
        refuse(list.place, printable(key) + " is " + kind_text(list) + ", wanted a list of values", list_remedy);
        return;
    }
    if (list.items.empty()) {
        refuse(list.place, printable(key) + " has no values, so there would be no case", "give it at least one value");
        return;
    }
    EachAxis axis{std::move(key), entry.key_place, {}, {}};
    const auto is_table = [](const TomlValue& value) { return value.kind == TomlValue::Kind::table; };
    const bool sets_keys = is_table(list.items.front());
    for (const TomlValue& value : list.items) {
        if (is_table(value) != sets_keys) {
            refuse(value.place, printable(axis.key) + " mixes plain values and tables",
                   "make all of its values plain, or all of them tables with a name");
            return;
        }
    }
    if (!sets_keys && !check_path({axis.key, axis.key_place, nullptr})) return;
    for (const TomlValue& value : list.items) read_choice(axis, value, sets_keys);
    read_.axes.push_back(std::move(axis));
}

void AxisReader::read_choice(EachAxis& axis, const TomlValue& value, bool sets_keys) {
    EachChoice choice{label_of(value), value.place, {}};
    if (sets_keys) {
        const TomlEntry* name = value.find("name");
        if (name == nullptr) {
            refuse(value.place, "this value of " + printable(axis.key) + " has no name",
                   "a table of values has a name that stands for it in the names of the cases: " +
                       std::string(table_remedy));
            return;
        }
        if (name->value.kind != TomlValue::Kind::text || name->value.text.empty()) {
            refuse(name->value.place, "the name of a value must be a string, not empty", table_remedy);
            return;
        }
        choice.label = printable(name->value.text);
        read_settings(choice, value, "");
    } else {
        if (choice.label.empty()) choice.label = "#" + std::to_string(axis.choices.size() + 1);
        choice.settings.push_back({axis.key, axis.key_place, &value});
    }
    const auto [first, is_new] = axis.labels.emplace(choice.label, choice.place);
    if (!is_new) {
        const std::string what = printable(last_part(axis.key)) + " " + choice.label;
        refuse(choice.place,
               quoted(what) + " is there twice, the other one in " + problems_.line_text(first->second, choice.place) +
                   ", so two cases would have one name",
               "take one of the two out");
        return;
    }
    axis.choices.push_back(std::move(choice));
}

void AxisReader::read_settings(EachChoice& choice, const TomlValue& table, const std::string& prefix) {
    for (const TomlEntry& entry : table.entries) {
        if (prefix.empty() && entry.key == "name") continue;
        const std::string path = prefix + entry.key;
        if (entry.value.kind == TomlValue::Kind::table) {
            read_settings(choice, entry.value, path + ".");
            continue;
        }
        const EachSetting setting{path, entry.key_place, &entry.value};
        if (check_path(setting)) choice.settings.push_back(setting);
    }
}

bool AxisReader::check_path(const EachSetting& setting) {
    const auto [first, rest] = split_path(setting.path);
    const auto refused = [&](const std::string& problem, std::string_view remedy) {
        refuse(setting.key_place, problem, remedy);
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

void AxisReader::refuse_twice_set() {
    struct Setter {
        const EachAxis* axis;
        const EachChoice* choice;
        Place key_place;
    };
    std::map<std::string, Setter> setters;
    for (const EachAxis& axis : read_.axes) {
        for (const EachChoice& choice : axis.choices) {
            for (const EachSetting& setting : choice.settings) {
                const auto tell = [&](Place other, std::string_view remedy) {
                    refuse(
                        setting.key_place,
                        quoted(setting.path) + " is set here and in " + problems_.line_text(other, setting.key_place),
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

}  // namespace

EachAxes read_axes(const TomlValue& case_table, const TomlValue& each, Problems& problems) {
    return AxisReader(case_table, problems).read(each);
}

std::pair<std::string, std::string> split_path(const std::string& path) {
    const std::size_t dot = path.find('.');
    if (dot == std::string::npos) return {path, {}};
    return {path.substr(0, dot), path.substr(dot + 1)};
}

std::string last_part(const std::string& path) { return path.substr(path.rfind('.') + 1); }

}  // namespace halflsb
