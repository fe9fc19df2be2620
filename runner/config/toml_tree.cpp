#include "runner/config/toml_tree.hpp"

#include <toml++/toml.h>

#include <algorithm>

#include "runner/config/syntax_message.hpp"

namespace halflsb {

namespace {

Place place_of(const toml::source_position& position, int source) {
    return {std::max(1, static_cast<int>(position.line)), std::max(1, static_cast<int>(position.column)), source};
}

TomlValue tree_of(const toml::node& node, int source);

TomlValue table_of(const toml::table& table, int source) {
    TomlValue value;
    value.kind = TomlValue::Kind::table;
    value.is_inline = table.is_inline();
    for (auto&& [key, child] : table) {
        value.entries.push_back({std::string(key.str()), place_of(key.source().begin, source), tree_of(child, source)});
    }
    // The library sorts by name; people read by line.
    std::stable_sort(value.entries.begin(), value.entries.end(),
                     [](const TomlEntry& a, const TomlEntry& b) { return a.key_place < b.key_place; });
    return value;
}

TomlValue tree_of(const toml::node& node, int source) {
    TomlValue value;
    switch (node.type()) {
        case toml::node_type::table:
            value = table_of(*node.as_table(), source);
            break;
        case toml::node_type::array:
            value.kind = TomlValue::Kind::array;
            for (const toml::node& item : *node.as_array()) value.items.push_back(tree_of(item, source));
            break;
        case toml::node_type::string:
            value.kind = TomlValue::Kind::text;
            value.text = node.as_string()->get();
            break;
        case toml::node_type::integer:
            value.kind = TomlValue::Kind::integer;
            value.integer = node.as_integer()->get();
            break;
        case toml::node_type::floating_point:
            value.kind = TomlValue::Kind::real;
            value.real = node.as_floating_point()->get();
            break;
        case toml::node_type::boolean:
            value.kind = TomlValue::Kind::boolean;
            value.boolean = node.as_boolean()->get();
            break;
        default:
            value.kind = TomlValue::Kind::date;
            break;
    }
    value.place = place_of(node.source().begin, source);
    return value;
}

/// The library builds and destroys nested tables by recursion; a key of a hundred thousand parts would
/// exhaust the stack. Where such a key starts to be too deep, or npos.
std::size_t too_deep_key(std::string_view text) {
    constexpr int most_parts = 64;
    int dots = 0;
    for (std::size_t i = 0; i < text.size(); ++i) {
        switch (text[i]) {
            case '.':
                if (++dots > most_parts) return i;
                break;
            case '"':
            case '\'': {
                const char quote = text[i];
                std::size_t end = i + 1;
                while (end < text.size() && text[end] != quote && text[end] != '\n') {
                    end += quote == '"' && text[end] == '\\' ? 2U : 1U;
                }
                if (end < text.size() && text[end] == quote) i = end;
                break;
            }
            case '\n':
            case ',':
            case '=':
            case '[':
            case ']':
            case '{':
            case '}':
            case '#':
                dots = 0;
                break;
            default:
                break;
        }
    }
    return std::string_view::npos;
}

}  // namespace

const TomlEntry* TomlValue::find(std::string_view key) const {
    const auto found = std::find_if(entries.begin(), entries.end(), [&](const TomlEntry& e) { return e.key == key; });
    return found == entries.end() ? nullptr : &*found;
}

std::string kind_text(const TomlValue& value) {
    switch (value.kind) {
        case TomlValue::Kind::text:
            return "a string";
        case TomlValue::Kind::integer:
            return "a whole number";
        case TomlValue::Kind::real:
            return "a number";
        case TomlValue::Kind::boolean:
            return "true or false";
        case TomlValue::Kind::date:
            return "a date or time";
        case TomlValue::Kind::array:
            return "a list";
        case TomlValue::Kind::table:
            return "a table";
    }
    return "nothing known";
}

std::variant<TomlValue, std::string> parse_toml(const SourceText& source, int source_index) {
    if (const std::size_t deep = too_deep_key(source.bytes()); deep != std::string_view::npos) {
        return source.render(source.place_of_byte(deep), "a key of more than 64 parts", "no key here has more than 3");
    }
    try {
        return tree_of(toml::parse(std::string_view(source.bytes())), source_index);
    } catch (const toml::parse_error& error) {
        return syntax_message(source, place_of(error.source().begin, source_index), error.description());
    } catch (const std::exception& error) {
        return source.render({1, 1}, std::string("the TOML library gave up: ") + error.what(),
                             "please report this file as a defect of halflsb");
    }
}

}  // namespace halflsb
