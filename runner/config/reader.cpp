#include "runner/config/reader.hpp"

#include <algorithm>
#include <charconv>

#include "runner/world/nearest.hpp"

namespace halflsb {

namespace {

/// The help of a word is a sentence, a remedy is none.
std::string as_remedy(std::string_view help) {
    std::string text(help);
    if (text.ends_with('.')) text.pop_back();
    const bool is_word = text.size() > 1 && (text[1] == ' ' || (text[1] >= 'a' && text[1] <= 'z'));
    if (is_word && text[0] >= 'A' && text[0] <= 'Z') text[0] = static_cast<char>(text[0] - 'A' + 'a');
    return text;
}

}  // namespace

Outcome<std::string_view> ReadContext::read_named_file(const std::string& path, std::size_t cap_bytes) {
    const auto known =
        std::find_if(parts.begin(), parts.end(), [&](const PlanPart& part) { return part.path == path; });
    // One that was taken with a higher cap is asked for again, to be refused as any other.
    if (known != parts.end() && known->bytes.size() <= cap_bytes) return std::string_view(known->bytes);
    auto bytes = files.read_under_root(root, path, cap_bytes);
    if (!bytes) return bytes.error();
    parts.push_back({path, std::move(*bytes)});
    return std::string_view(parts.back().bytes);
}

TableReader::TableReader(ReadContext& context, const TomlValue& table, std::string title, const TableReader* outer)
    : context_(context),
      table_(table),
      title_(std::move(title)),
      outer_(outer),
      problems_before_(context.problems.count()) {}

bool TableReader::knows(std::string_view key) const {
    return std::find(known_.begin(), known_.end(), key) != known_.end();
}

std::string TableReader::where() const { return title_.empty() ? "the file" : title_; }

std::string TableReader::header_of(std::string_view key) const {
    if (title_.empty()) return std::string(key);
    const std::size_t begin = title_.find_first_not_of('[');
    return title_.substr(begin, title_.find(']') - begin) + "." + std::string(key);
}

Place TableReader::place_of(std::string_view key) const {
    const TomlValue* table = &table_;
    for (;;) {
        const std::size_t dot = key.find('.');
        std::string_view word = key.substr(0, dot);
        std::size_t item = 0;
        if (const std::size_t bracket = word.find('['); bracket != std::string_view::npos) {
            std::from_chars(word.data() + bracket + 1, word.data() + word.size(), item);
            word = word.substr(0, bracket);
        }
        const TomlEntry* found = table->find(word);
        if (found == nullptr) return table->place;
        const std::vector<TomlValue>& items = found->value.items;
        if (item < 1 || item > items.size() || items[item - 1].kind != TomlValue::Kind::table)
            return found->value.place;
        table = &items[item - 1];
        if (dot == std::string_view::npos) return table->place;
        key = key.substr(dot + 1);
    }
}

const TomlEntry* TableReader::entry(std::string_view key) {
    if (!knows(key)) known_.push_back(key);
    return table_.find(key);
}

ParameterValues TableReader::parameters(const Recipe& recipe, std::string_view may_lack) {
    ParameterValues values;
    // All known before the first is read: a list of tables may hold what belongs here.
    for (const Parameter& parameter : recipe.parameters) entry(parameter.name);
    for (const Parameter& parameter : recipe.parameters) {
        const TomlEntry* found = table_.find(parameter.name);
        if (found != nullptr) {
            if (auto value = read_value(parameter, *found, context_, this))
                values.set(std::string(parameter.name), std::move(*value));
        } else if (parameter.required && parameter.name != may_lack) {
            refuse(place(), where() + addition_ + " has no " + std::string(parameter.name),
                   "add " + std::string(parameter.name) + ": " + as_remedy(parameter.help));
        }
    }
    return values;
}

const Recipe* TableReader::chosen_recipe(std::string_view key, const std::vector<Recipe>& recipes) {
    Parameter choice{.name = key, .type = ParameterType::choice};
    for (const Recipe& recipe : recipes) choice.choices.push_back(recipe.name);
    const TomlEntry* found = entry(key);
    if (found == nullptr) {
        refuse(place(), where() + " has no " + std::string(key),
               "add " + std::string(key) + " = one of: " + joined_words(choice.choices));
        return nullptr;
    }
    const auto value = read_value(choice, *found, context_);
    if (!value) return nullptr;
    addition_ = " of " + std::string(key) + " \"" + std::get<std::string>(*value) + "\"";
    return find_recipe(recipes, std::get<std::string>(*value));
}

const TomlValue* TableReader::table(std::string_view key, bool required) {
    const std::string header = header_of(key);
    const TomlEntry* found = entry(key);
    if (found == nullptr) {
        if (required)
            refuse(place(), where() + " has no [" + header + "]", "add it; docs/plan.md and docs/rig.md show how");
        return nullptr;
    }
    if (found->value.kind == TomlValue::Kind::table) return &found->value;
    const bool is_list = found->value.kind == TomlValue::Kind::array;
    refuse(found->value.place,
           std::string(key) + " is " + (is_list ? "a list" : kind_text(found->value)) + ", wanted one table",
           "write it under the header [" + header + "]");
    return nullptr;
}

std::vector<const TomlValue*> TableReader::tables(std::string_view key) {
    const std::string header = header_of(key);
    const TomlEntry* found = entry(key);
    std::vector<const TomlValue*> list;
    if (found == nullptr) return list;
    if (found->value.kind != TomlValue::Kind::array) {
        refuse(found->value.place, std::string(key) + " is " + kind_text(found->value) + ", wanted a list of tables",
               "write each under the header [[" + header + "]]");
        return list;
    }
    for (const TomlValue& item : found->value.items) {
        if (item.kind == TomlValue::Kind::table) {
            list.push_back(&item);
        } else {
            refuse(item.place, "in " + std::string(key) + " stands " + kind_text(item) + ", wanted tables",
                   "write each under the header [[" + header + "]]");
        }
    }
    return list;
}

void TableReader::refuse_unknown_keys() {
    for (const TomlEntry& found : table_.entries) {
        if (knows(found.key)) continue;
        // TOML's trap: a key belongs to the header above it, however it is indented.
        const TableReader* owner = outer_;
        while (owner != nullptr && !owner->knows(found.key)) owner = owner->outer_;
        if (owner != nullptr) {
            const bool is_top = owner->title_.empty();
            refuse(found.key_place,
                   quoted(found.key) + " belongs " + (is_top ? "to the top of the file" : "to " + owner->title_) +
                       ", here it stands in " + title_,
                   is_top ? "move the line above the first header"
                          : "move the line up, to the other keys of " + owner->title_);
            continue;
        }
        const std::string_view nearest = nearest_word(found.key, known_);
        refuse(found.key_place, "unknown key " + quoted(found.key) + " in " + where() + addition_,
               nearest.empty() ? "known here: " + joined_words(known_, " and ")
                               : "did you mean " + std::string(nearest) + "?");
    }
}

void TableReader::refuse(const Error& error) {
    const std::string word = error.place.substr(error.place.rfind('.') + 1);
    const bool named = word.empty() || error.problem.find(word) != std::string::npos;
    refuse(place_of(error.place), named ? error.problem : error.place + ": " + error.problem, error.remedy);
}

void TableReader::refuse(Place place, std::string_view problem, std::string_view remedy) {
    context_.problems.add(place, problem, remedy);
}

}  // namespace halflsb
