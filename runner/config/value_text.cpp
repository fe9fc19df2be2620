#include "runner/config/value_text.hpp"

#include <cmath>

#include "runner/world/printable.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

std::string found_text(const TomlValue& value) {
    switch (value.kind) {
        case TomlValue::Kind::text:
            return "the string " + quoted(value.text);
        case TomlValue::Kind::integer:
            return "the whole number " + std::to_string(value.integer);
        case TomlValue::Kind::real:
            return "the number " + number_text(value.real) + (value.real == std::floor(value.real) ? ".0" : "");
        case TomlValue::Kind::boolean:
            return value.boolean ? "true" : "false";
        default:
            return kind_text(value);
    }
}

std::string wanted_text(ParameterType type) {
    switch (type) {
        case ParameterType::integer:
            return "a whole number";
        case ParameterType::real:
            return "a number";
        case ParameterType::text:
        case ParameterType::choice:
            return "a string";
        case ParameterType::reals:
            return "a list of numbers";
        case ParameterType::sections:
            return "a list of lists of numbers";
        case ParameterType::bands:
            return "a list of tables";
        case ParameterType::file:
        case ParameterType::signal_file:
        case ParameterType::mask_file:
            return "the name of a file";
        case ParameterType::integers:
            return "a list of whole numbers";
        case ParameterType::stimuli:
            return "a list of tables";
    }
    return {};
}

std::string example_text(const Parameter& parameter) {
    const std::string start = "write " + std::string(parameter.name) + " = ";
    switch (parameter.type) {
        case ParameterType::integer:
            return start + "16, without a decimal point and without quotation marks";
        case ParameterType::real:
            return start + "0.5, without quotation marks";
        case ParameterType::text:
            return start + "\"...\"";
        case ParameterType::choice:
            return start + "\"" + std::string(parameter.choices.empty() ? "..." : parameter.choices.front()) + "\"";
        case ParameterType::reals:
            return start + "[0.25, 0.5, 0.25]";
        case ParameterType::sections:
            return start + "[[b0, b1, b2, a1, a2], ...], with numbers";
        case ParameterType::bands:
            return start + "[{ from_hz = 0.0, to_hz = 50.0, min_db = -1.0, max_db = 1.0 }, ...]";
        case ParameterType::file:
            return start + "\"taps.txt\", a path under the root";
        case ParameterType::signal_file:
            return start + "\"recorded.npy\", a path under the root";
        case ParameterType::mask_file:
            return start + "\"mask.csv\", a path under the root";
        case ParameterType::integers:
            return start + "[1, 2]";
        case ParameterType::stimuli:
            return start + "[{ shape = \"step\", length_samples = 100 }, ...]";
    }
    return {};
}

std::string range_text(const Parameter& parameter) {
    const bool below = std::isfinite(parameter.minimum), above = std::isfinite(parameter.maximum);
    const std::string unit = parameter.unit.empty() ? "" : " " + std::string(parameter.unit);
    if (below && parameter.above_minimum)
        return "above " + number_text(parameter.minimum) +
               (above ? " and at most " + number_text(parameter.maximum) : "") + unit;
    if (below && above)
        return "from " + number_text(parameter.minimum) + " to " + number_text(parameter.maximum) + unit;
    if (below) return "of at least " + number_text(parameter.minimum) + unit;
    if (above) return "of at most " + number_text(parameter.maximum) + unit;
    return {};
}

}  // namespace halflsb
