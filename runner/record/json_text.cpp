#include "runner/record/json_text.hpp"

#include <algorithm>
#include <array>
#include <charconv>
#include <cmath>
#include <nlohmann/json.hpp>

namespace halflsb {

namespace {

using Json = nlohmann::ordered_json;

std::string number(double value) {
    if (!std::isfinite(value)) return "null";
    std::array<char, 40> buffer;  // the shortest form takes at most 24 characters
    const auto end = std::to_chars(buffer.data(), buffer.data() + buffer.size(), value);
    return std::string(buffer.data(), end.ptr);
}

std::string quoted(const std::string& text) { return Json(text).dump(-1, ' ', false, Json::error_handler_t::replace); }

void append(std::string& out, const Json& value, std::size_t level) {
    const bool on_one_line =
        value.is_array() && std::none_of(value.begin(), value.end(), [](const Json& v) { return v.is_structured(); });
    if (value.is_number_float()) {
        out += number(value.get<double>());
    } else if (value.is_string()) {
        out += quoted(value.get_ref<const std::string&>());
    } else if (!value.is_structured() || value.empty()) {
        out += value.dump();
    } else {
        out += value.is_array() ? '[' : '{';
        bool first = true;
        for (auto it = value.begin(); it != value.end(); ++it) {
            if (!first) out += on_one_line ? ", " : ",";
            if (!on_one_line) out += "\n" + std::string(2 * (level + 1), ' ');
            if (value.is_object()) out += quoted(it.key()) + ": ";
            append(out, *it, level + 1);
            first = false;
        }
        if (!on_one_line) out += "\n" + std::string(2 * level, ' ');
        out += value.is_array() ? ']' : '}';
    }
}

}  // namespace

std::string json_value_text(const Json& value, std::size_t level) {
    std::string out;
    append(out, value, level);
    return out;
}

std::string json_text(const Json& document) { return json_value_text(document, 0) + "\n"; }

}  // namespace halflsb
