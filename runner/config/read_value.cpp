// One value of a plan or a rig against its Parameter: type, finite, range, choice.
#include <algorithm>
#include <cmath>

#include "runner/config/bands.hpp"
#include "runner/config/csv_mask.hpp"
#include "runner/config/nested_stimuli.hpp"
#include "runner/config/reader.hpp"
#include "runner/config/signal_file.hpp"
#include "runner/config/value_text.hpp"
#include "runner/world/nearest.hpp"
#include "runner/world/printable.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

void refuse_type(const Parameter& parameter, const TomlValue& value, std::string_view name, std::string_view wanted,
                 ReadContext& context) {
    context.problems.add(value.place,
                         std::string(name) + " is " + found_text(value) + ", wanted " + std::string(wanted),
                         example_text(parameter));
}

std::string range_remedy(const Parameter& parameter, std::string_view what) {
    return "give " + std::string(what) + (range_text(parameter).empty() ? "" : " " + range_text(parameter));
}

/// A finite number within the range; `name` is what messages call it.
std::optional<double> number_of(const Parameter& parameter, const TomlValue& value, const std::string& name,
                                ReadContext& context) {
    const bool is_whole = parameter.type == ParameterType::integer || parameter.type == ParameterType::integers;
    const std::string wanted = is_whole ? "a whole number" : "a number";
    double number = 0.0;
    if (value.kind == TomlValue::Kind::integer) {
        number = static_cast<double>(value.integer);
    } else if (value.kind == TomlValue::Kind::real) {
        number = value.real;
    } else {
        refuse_type(parameter, value, name, wanted, context);
        return std::nullopt;
    }
    if (!std::isfinite(number)) {
        const std::string word = std::isnan(number) ? "nan" : number > 0.0 ? "inf" : "-inf";
        context.problems.add(value.place, name + " = " + word + " is no finite number",
                             range_remedy(parameter, wanted));
        return std::nullopt;
    }
    if (is_whole && value.kind != TomlValue::Kind::integer) {
        refuse_type(parameter, value, name, wanted, context);
        return std::nullopt;
    }
    // Of an integer the text as written: a double may not hold it.
    const std::string shown =
        value.kind == TomlValue::Kind::integer ? std::to_string(value.integer) : number_text(number);
    if (!(number >= parameter.minimum)) {
        context.problems.add(value.place, name + " = " + shown + " is below " + number_text(parameter.minimum),
                             range_remedy(parameter, wanted));
        return std::nullopt;
    }
    if (parameter.above_minimum && !(number > parameter.minimum)) {
        context.problems.add(value.place, name + " = " + shown + " is not above " + number_text(parameter.minimum),
                             range_remedy(parameter, wanted));
        return std::nullopt;
    }
    if (!(number <= parameter.maximum)) {
        context.problems.add(value.place, name + " = " + shown + " is above " + number_text(parameter.maximum),
                             range_remedy(parameter, wanted));
        return std::nullopt;
    }
    return number;
}

std::optional<std::string> text_of(const Parameter& parameter, const TomlValue& value, ReadContext& context) {
    const std::string name(parameter.name);
    if (value.kind != TomlValue::Kind::text) {
        refuse_type(parameter, value, name, wanted_text(parameter.type), context);
        return std::nullopt;
    }
    if (value.text.empty()) {
        context.problems.add(value.place, name + " is empty", "give it at least one character");
        return std::nullopt;
    }
    if (printable(value.text) != value.text) {
        context.problems.add(value.place, name + " = " + quoted(value.text) + " holds a control character",
                             "use characters that can be seen, in one line");
        return std::nullopt;
    }
    const std::size_t length = columns_of(value.text);
    if (!(static_cast<double>(length) <= parameter.maximum)) {
        context.problems.add(value.place, name + " has " + std::to_string(length) + " characters",
                             "give at most " + number_text(parameter.maximum));
        return std::nullopt;
    }
    return value.text;
}

std::optional<std::string> choice_of(const Parameter& parameter, const TomlValue& value, ReadContext& context) {
    if (value.kind != TomlValue::Kind::text) {
        refuse_type(parameter, value, parameter.name, "a string", context);
        return std::nullopt;
    }
    if (std::find(parameter.choices.begin(), parameter.choices.end(), value.text) != parameter.choices.end())
        return value.text;
    const std::string_view nearest = nearest_word(value.text, parameter.choices);
    std::vector<std::string> words;
    for (const std::string_view choice : parameter.choices) words.push_back("\"" + std::string(choice) + "\"");
    const std::vector<std::string_view> views(words.begin(), words.end());
    context.problems.add(
        value.place, std::string(parameter.name) + " = " + quoted(value.text) + " is not known",
        nearest.empty() ? "give " + joined_words(views) : "did you mean \"" + std::string(nearest) + "\"?");
    return std::nullopt;
}

std::optional<std::vector<double>> reals_of(const Parameter& parameter, const TomlValue& value, const std::string& name,
                                            ReadContext& context) {
    if (value.kind != TomlValue::Kind::array) {
        refuse_type(parameter, value, name,
                    parameter.type == ParameterType::integers ? wanted_text(parameter.type) : "a list of numbers",
                    context);
        return std::nullopt;
    }
    if (value.items.empty()) {
        context.problems.add(value.place, name + " is empty", "give it at least one number");
        return std::nullopt;
    }
    std::vector<double> numbers;
    for (const TomlValue& item : value.items) {
        const auto number = number_of(parameter, item, name + "[" + std::to_string(numbers.size()) + "]", context);
        if (!number) return std::nullopt;
        numbers.push_back(*number);
    }
    return numbers;
}

std::optional<std::vector<std::vector<double>>> sections_of(const Parameter& parameter, const TomlValue& value,
                                                            ReadContext& context) {
    const std::string name(parameter.name);
    if (value.kind != TomlValue::Kind::array) {
        refuse_type(parameter, value, name, wanted_text(parameter.type), context);
        return std::nullopt;
    }
    if (value.items.empty()) {
        context.problems.add(value.place, name + " is empty", "give it at least one section");
        return std::nullopt;
    }
    std::vector<std::vector<double>> rows;
    for (const TomlValue& item : value.items) {
        auto row = reals_of(parameter, item, name + "[" + std::to_string(rows.size()) + "]", context);
        if (!row) return std::nullopt;
        rows.push_back(std::move(*row));
    }
    return rows;
}

/// The bytes of a file that the plan names.
std::optional<std::string_view> named_bytes(const Parameter& parameter, const TomlValue& value, const std::string& path,
                                            ReadContext& context) {
    auto bytes = context.read_named_file(path, largest_named_file_bytes);
    if (bytes) return *bytes;
    const std::string what =
        std::string(parameter.name) + " = " + quoted(path) + ": " + printable(bytes.error().problem);
    context.problems.add(value.place, what, printable(bytes.error().remedy));
    return std::nullopt;
}

std::optional<std::shared_ptr<const SignalFile>> signal_file_of(const Parameter& parameter, const TomlValue& value,
                                                                ReadContext& context) {
    const auto path = text_of(parameter, value, context);
    if (!path) return std::nullopt;
    const auto rate_hz = context.nyquist_hz ? std::optional(2.0 * *context.nyquist_hz) : std::nullopt;
    std::shared_ptr<const SignalFile>& known =
        context.signal_files[*path + '\0' + (rate_hz ? number_text(*rate_hz) : std::string())];
    if (known != nullptr) return known;
    auto bytes = named_bytes(parameter, value, *path, context);
    if (!bytes) return std::nullopt;
    auto read = read_signal_file({*path, context.root + "/" + *path, rate_hz}, std::string(*bytes));
    if (const auto* text = std::get_if<std::string>(&read)) {
        context.problems.add_rendered(value.place, *text);
        return std::nullopt;
    }
    known = std::make_shared<const SignalFile>(std::get<SignalFile>(std::move(read)));
    return known;
}

std::optional<std::shared_ptr<const SignalFile>> mask_file_of(const Parameter& parameter, const TomlValue& value,
                                                              ReadContext& context) {
    const auto path = text_of(parameter, value, context);
    if (!path) return std::nullopt;
    const auto bytes = named_bytes(parameter, value, *path, context);
    if (!bytes) return std::nullopt;
    const SourceText source(context.root + "/" + *path, std::string(*bytes));
    auto read = read_csv_mask(*path, source, context.nyquist_hz);
    if (const auto* text = std::get_if<std::string>(&read)) {
        context.problems.add_rendered(value.place, *text);
        return std::nullopt;
    }
    return std::make_shared<const SignalFile>(std::get<SignalFile>(std::move(read)));
}

template <class T>
std::optional<ParameterValue> as_value(std::optional<T> value) {
    if (!value) return std::nullopt;
    return ParameterValue(std::move(*value));
}

}  // namespace

std::optional<ParameterValue> read_value(const Parameter& parameter, const TomlEntry& entry, ReadContext& context,
                                         const TableReader* owner) {
    const TomlValue& value = entry.value;
    switch (parameter.type) {
        case ParameterType::integer:
            if (!number_of(parameter, value, std::string(parameter.name), context)) return std::nullopt;
            return value.integer;
        case ParameterType::real:
            if (value.kind == TomlValue::Kind::text && !parameter.choices.empty())
                return as_value(choice_of(parameter, value, context));
            return as_value(number_of(parameter, value, std::string(parameter.name), context));
        case ParameterType::text:
            return as_value(text_of(parameter, value, context));
        case ParameterType::choice:
            return as_value(choice_of(parameter, value, context));
        case ParameterType::reals:
        case ParameterType::integers:
            return as_value(reals_of(parameter, value, std::string(parameter.name), context));
        case ParameterType::sections:
            return as_value(sections_of(parameter, value, context));
        case ParameterType::file:
            // The path: what the file's numbers mean is said by other words of the table (coefficient_files.hpp).
            return as_value(text_of(parameter, value, context));
        case ParameterType::bands:
            if (value.kind != TomlValue::Kind::array) {
                refuse_type(parameter, value, parameter.name, wanted_text(parameter.type), context);
                return std::nullopt;
            }
            return as_value(read_bands(value, context));
        case ParameterType::signal_file:
            return as_value(signal_file_of(parameter, value, context));
        case ParameterType::mask_file:
            return as_value(mask_file_of(parameter, value, context));
        case ParameterType::stimuli:
            if (value.kind != TomlValue::Kind::array) {
                refuse_type(parameter, value, parameter.name, wanted_text(parameter.type), context);
                return std::nullopt;
            }
            return as_value(read_nested_stimuli(parameter.name, value, context, owner));
    }
    return std::nullopt;
}

}  // namespace halflsb
