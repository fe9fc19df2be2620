#include "stimuli/values_check.hpp"

#include <algorithm>
#include <cmath>

#include "stimuli/number_text.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

std::string listed(const std::vector<std::string_view>& words) {
    std::string text;
    for (const auto word : words) text += (text.empty() ? "" : ", ") + std::string(word);
    return text;
}

std::string_view type_text(ParameterType type) {
    switch (type) {
        case ParameterType::integer:
            return "a whole number";
        case ParameterType::real:
            return "a number";
        case ParameterType::text:
        case ParameterType::choice:
            return "a string";
        case ParameterType::reals:
        case ParameterType::file:
        case ParameterType::integers:
            return "a list of numbers";
        case ParameterType::signal_file:
        case ParameterType::mask_file:
            return "the samples of a file";
        case ParameterType::stimuli:
            return "a list of stimuli";
        case ParameterType::sections:
        case ParameterType::bands:
            return "a list of lists of numbers";
    }
    return "something else";
}

/// Not an empty pointer.
template <class T>
bool holds_object(const ParameterValue& value) {
    const auto* pointer = std::get_if<std::shared_ptr<const T>>(&value);
    return pointer != nullptr && *pointer != nullptr;
}

bool type_fits(ParameterType type, const ParameterValue& value) {
    switch (type) {
        case ParameterType::integer:
            return std::holds_alternative<std::int64_t>(value);
        case ParameterType::real:
            return std::holds_alternative<std::int64_t>(value) || std::holds_alternative<double>(value);
        case ParameterType::text:
        case ParameterType::choice:
            return std::holds_alternative<std::string>(value);
        case ParameterType::signal_file:
        case ParameterType::mask_file:
            return holds_object<SignalFile>(value);
        case ParameterType::stimuli:
            return holds_object<std::vector<StimulusWords>>(value);
        case ParameterType::reals:
        case ParameterType::file:
        case ParameterType::integers:
            return std::holds_alternative<std::vector<double>>(value);
        case ParameterType::sections:
        case ParameterType::bands:
            return std::holds_alternative<std::vector<std::vector<double>>>(value);
    }
    return false;
}

std::optional<Error> number_misfit(const Parameter& parameter, double number) {
    if (!std::isfinite(number)) return refused(parameter.name, number_text(number) + " is not finite", "give a number");
    const std::string unit = parameter.unit.empty() ? "" : " " + std::string(parameter.unit);
    if (parameter.above_minimum && number <= parameter.minimum) {
        return refused(parameter.name,
                       number_text(number) + unit + " is not above " + number_text(parameter.minimum) + unit,
                       "give more than " + number_text(parameter.minimum));
    }
    if (number < parameter.minimum) {
        return refused(parameter.name,
                       number_text(number) + unit + " is below the least, " + number_text(parameter.minimum) + unit,
                       "give " + number_text(parameter.minimum) + " or more");
    }
    if (number > parameter.maximum) {
        return refused(parameter.name,
                       number_text(number) + unit + " is above the largest, " + number_text(parameter.maximum) + unit,
                       "give " + number_text(parameter.maximum) + " or less");
    }
    return std::nullopt;
}

std::optional<Error> numbers_misfit(const Parameter& parameter, const std::vector<double>& numbers) {
    if (numbers.empty()) return refused(parameter.name, "the list is empty", "give at least one number");
    for (const double number : numbers) {
        if (auto error = number_misfit(parameter, number)) return error;
        if (parameter.type == ParameterType::integers && std::floor(number) != number) {
            return refused(parameter.name, number_text(number) + " is no whole number", "give whole numbers");
        }
    }
    return std::nullopt;
}

std::optional<Error> value_misfit(const Parameter& parameter, const ParameterValue& value) {
    const bool is_word = parameter.type == ParameterType::real && !parameter.choices.empty() &&
                         std::holds_alternative<std::string>(value);
    if (!is_word && !type_fits(parameter.type, value)) {
        return refused(parameter.name, "needs " + std::string(type_text(parameter.type)), "");
    }
    if (const auto* whole = std::get_if<std::int64_t>(&value)) {
        return number_misfit(parameter, static_cast<double>(*whole));
    }
    if (const auto* real = std::get_if<double>(&value)) return number_misfit(parameter, *real);
    if (const auto* list = std::get_if<std::vector<double>>(&value)) return numbers_misfit(parameter, *list);
    if (const auto* rows = std::get_if<std::vector<std::vector<double>>>(&value)) {
        if (rows->empty()) return refused(parameter.name, "the list is empty", "give at least one row");
        for (const auto& row : *rows) {
            if (auto error = numbers_misfit(parameter, row)) return error;
        }
        return std::nullopt;
    }
    if (!std::holds_alternative<std::string>(value)) return std::nullopt;
    const auto& text = *std::get_if<std::string>(&value);
    const auto& choices = parameter.choices;
    if ((parameter.type == ParameterType::choice || is_word) &&
        std::find(choices.begin(), choices.end(), text) == choices.end()) {
        return refused(parameter.name, "\"" + text + "\" is not a choice", "choices: " + listed(choices));
    }
    return std::nullopt;
}

/// Looks through stimuli inside stimuli; bounded, because whoever calls may have built anything.
class NestedCheck {
public:
    std::optional<Error> misfit(const Recipe& recipe, const ParameterValues& values, bool needs_length, int depth) {
        for (const auto& [name, value] : values.all()) {
            const Parameter* parameter = find_parameter(recipe, name);
            if (parameter == nullptr) {
                std::vector<std::string_view> known;
                for (const Parameter& each : recipe.parameters) known.push_back(each.name);
                return refused(name, "\"" + std::string(recipe.name) + "\" has no such parameter",
                               "parameters: " + listed(known));
            }
            if (auto error = value_misfit(*parameter, value)) return error;
            if (parameter->type == ParameterType::stimuli) {
                if (auto error = list_misfit(*parameter, value, depth + 1)) return error;
            }
        }
        for (const Parameter& parameter : recipe.parameters) {
            const bool needed = parameter.required && (needs_length || parameter.name != "length_samples");
            if (needed && !values.has(parameter.name)) {
                return refused(parameter.name, "is missing, and \"" + std::string(recipe.name) + "\" needs it",
                               "give " + std::string(type_text(parameter.type)));
            }
        }
        return std::nullopt;
    }

private:
    std::optional<Error> list_misfit(const Parameter& parameter, const ParameterValue& value, int depth) {
        const auto& list = **std::get_if<std::shared_ptr<const std::vector<StimulusWords>>>(&value);
        if (list.empty()) return refused(parameter.name, "the list is empty", "give at least one stimulus");
        if (depth > deepest_nesting) {
            return refused(parameter.name, "stimuli stand " + std::to_string(depth) + " deep in each other",
                           "nest at most " + std::to_string(deepest_nesting) + " deep");
        }
        for (std::size_t i = 0; i < list.size(); ++i) {
            if (++stimuli_ > most_nested_stimuli) {
                return refused(
                    parameter.name, "there are more than " + std::to_string(most_nested_stimuli) + " stimuli in all",
                    "give at most " + std::to_string(most_nested_stimuli) + "; repeat says a part many times");
            }
            const Recipe* recipe = find_recipe(stimulus_recipes(), list[i].shape);
            auto error = recipe == nullptr ? std::optional(unknown_shape_error(list[i].shape))
                                           : misfit(*recipe, list[i].values, parameter.name != "add", depth);
            if (error) return inside(parameter.name, i, *error);
        }
        return std::nullopt;
    }

    int stimuli_ = 0;
};

}  // namespace

std::optional<Error> misfit_of(const Recipe& recipe, const ParameterValues& values) {
    return NestedCheck().misfit(recipe, values, true, 0);
}

Error unknown_shape_error(std::string_view shape) {
    std::vector<std::string_view> known;
    for (const Recipe& recipe : stimulus_recipes()) known.push_back(recipe.name);
    return refused("shape", "no stimulus is called \"" + std::string(shape) + "\"", "shapes: " + listed(known));
}

}  // namespace halflsb
