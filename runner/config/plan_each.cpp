#include "runner/config/plan_each.hpp"

#include <algorithm>
#include <cmath>

#include "runner/config/plan_words.hpp"
#include "runner/world/printable.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

double count_values(const TomlValue& value) {
    double count = 1.0;
    for (const TomlValue& item : value.items) count += count_values(item);
    for (const TomlEntry& entry : value.entries) count += count_values(entry.value);
    return count;
}

void put(TomlValue& table, const std::string& path, Place key_place, const TomlValue& value) {
    const auto [first, rest] = split_path(path);
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
    if (each_ != nullptr) each_axes_ = read_axes(case_table, each_->value, problems);
}

double CaseExpansion::count() const {
    double count = 1.0;
    for (const EachAxis& axis : each_axes_.axes) count *= static_cast<double>(axis.choices.size());
    return count;
}

double CaseExpansion::value_count() const {
    double values = count_values(table_);
    if (each_ != nullptr) values -= count_values(each_->value);
    double all = values * count();
    for (const EachAxis& axis : each_axes_.axes) {
        double of_axis = 0.0;
        for (const EachChoice& choice : axis.choices) {
            for (const EachSetting& setting : choice.settings) of_axis += count_values(*setting.value);
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
    if (each_axes_.axes.empty()) return copy;

    // The last key varies fastest: its digit is the lowest.
    std::vector<const EachChoice*> chosen(each_axes_.axes.size());
    for (std::size_t i = each_axes_.axes.size(); i-- > 0;) {
        chosen[i] = &each_axes_.axes[i].choices[index % each_axes_.axes[i].choices.size()];
        index /= each_axes_.axes[i].choices.size();
    }
    std::string varied;
    for (std::size_t i = 0; i < each_axes_.axes.size(); ++i) {
        varied += ", " + printable(last_part(each_axes_.axes[i].key)) + " " + chosen[i]->label;
        for (const EachSetting& setting : chosen[i]->settings)
            put(copy, setting.path, setting.key_place, *setting.value);
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
