#include "runner/config/toml_text.hpp"

#include <algorithm>
#include <cmath>

#include "runner/world/toml_quoted.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

constexpr std::size_t widest_line = 110;
constexpr std::string_view indent = "    ";

std::string toml_real(double value) {
    if (std::isnan(value)) return "nan";
    if (std::isinf(value)) return value > 0.0 ? "inf" : "-inf";
    const std::string text = number_text(value);
    return text.find_first_of(".e") == std::string::npos ? text + ".0" : text;
}

/// `key = value`, an array that is too wide with an item a line.
std::string assignment(const TomlEntry& entry) {
    const std::string start = toml_key(entry.key) + " = ";
    const std::string line = start + toml_value(entry.value);
    if (line.size() <= widest_line || entry.value.kind != TomlValue::Kind::array) return line + "\n";
    std::string text = start + "[\n", row(indent);
    for (const TomlValue& item : entry.value.items) {
        const std::string shown = toml_value(item) + ",";
        if (row.size() > indent.size() && row.size() + 1 + shown.size() > widest_line) {
            text += row + "\n";
            row = indent;
        }
        row += (row.size() > indent.size() ? " " : "") + shown;
    }
    return text + row + "\n]\n";
}

bool is_listed(const TomlEntry& entry, const std::vector<std::string_view>& listed) {
    return entry.value.kind == TomlValue::Kind::array && !entry.value.items.empty() &&
           std::find(listed.begin(), listed.end(), entry.key) != listed.end();
}

}  // namespace

std::string toml_key(std::string_view key) {
    const bool is_bare = !key.empty() && std::all_of(key.begin(), key.end(), [](char c) {
        return (c >= '0' && c <= '9') || (c >= 'a' && c <= 'z') || (c >= 'A' && c <= 'Z') || c == '-' || c == '_';
    });
    return is_bare ? std::string(key) : toml_quoted(key);
}

std::string toml_value(const TomlValue& value) {
    std::string text;
    switch (value.kind) {
        case TomlValue::Kind::text:
            return toml_quoted(value.text);
        case TomlValue::Kind::integer:
            return std::to_string(value.integer);
        case TomlValue::Kind::real:
            return toml_real(value.real);
        case TomlValue::Kind::boolean:
            return value.boolean ? "true" : "false";
        case TomlValue::Kind::date:
            return "1970-01-01";  // no plan has one
        case TomlValue::Kind::array:
            for (const TomlValue& item : value.items) text += (text.empty() ? "" : ", ") + toml_value(item);
            return "[" + text + "]";
        case TomlValue::Kind::table:
            for (const TomlEntry& entry : value.entries)
                text += (text.empty() ? " " : ", ") + toml_key(entry.key) + " = " + toml_value(entry.value);
            return "{" + text + (text.empty() ? "}" : " }");
    }
    return text;
}

std::string toml_table(const TomlValue& table, const std::string& header, const std::vector<std::string_view>& listed) {
    const auto path = [&](const TomlEntry& entry) {
        return header.empty() ? toml_key(entry.key) : header + "." + toml_key(entry.key);
    };
    const bool is_top = header.empty();
    std::string text;
    for (const TomlEntry& entry : table.entries) {
        if (entry.value.kind != TomlValue::Kind::table && !is_listed(entry, listed)) text += assignment(entry);
    }
    for (const TomlEntry& entry : table.entries) {
        if (entry.value.kind != TomlValue::Kind::table) continue;
        text += (is_top ? "\n[" : "[") + path(entry) + "]\n" + toml_table(entry.value, path(entry), listed);
    }
    for (const TomlEntry& entry : table.entries) {
        if (!is_listed(entry, listed)) continue;
        for (const TomlValue& item : entry.value.items) {
            text += (is_top ? "\n[[" : "[[") + path(entry) + "]]\n" + toml_table(item, path(entry), listed);
        }
    }
    return text;
}

}  // namespace halflsb
