#include "stimuli/parameter.hpp"

#include <algorithm>

namespace halflsb {

void ParameterValues::set(std::string name, ParameterValue value) {
    values_.insert_or_assign(std::move(name), std::move(value));
}

bool ParameterValues::has(std::string_view name) const { return values_.find(name) != values_.end(); }

std::optional<double> ParameterValues::number(const Recipe& recipe, std::string_view name) const {
    if (const auto found = values_.find(name); found != values_.end()) {
        if (const auto* whole = std::get_if<std::int64_t>(&found->second)) return static_cast<double>(*whole);
        if (const auto* real = std::get_if<double>(&found->second)) return *real;
        return std::nullopt;
    }
    const Parameter* parameter = find_parameter(recipe, name);
    return parameter == nullptr ? std::nullopt : parameter->default_value;
}

std::optional<std::int64_t> ParameterValues::integer(const Recipe& recipe, std::string_view name) const {
    if (const auto found = values_.find(name); found != values_.end()) {
        if (const auto* whole = std::get_if<std::int64_t>(&found->second)) return *whole;
        return std::nullopt;
    }
    const auto fallback = number(recipe, name);
    if (!fallback) return std::nullopt;
    return static_cast<std::int64_t>(*fallback);
}

std::optional<std::string> ParameterValues::text(const Recipe& recipe, std::string_view name) const {
    if (const auto found = values_.find(name); found != values_.end()) {
        if (const auto* text = std::get_if<std::string>(&found->second)) return *text;
        return std::nullopt;
    }
    const Parameter* parameter = find_parameter(recipe, name);
    if (parameter == nullptr || parameter->type != ParameterType::choice || parameter->required ||
        parameter->optional_choice || parameter->choices.empty()) {
        return std::nullopt;
    }
    return std::string(parameter->choices.front());
}

std::vector<double> ParameterValues::numbers(std::string_view name) const {
    const auto found = values_.find(name);
    if (found == values_.end()) return {};
    const auto* list = std::get_if<std::vector<double>>(&found->second);
    return list == nullptr ? std::vector<double>{} : *list;
}

std::vector<std::vector<double>> ParameterValues::rows(std::string_view name) const {
    const auto found = values_.find(name);
    if (found == values_.end()) return {};
    const auto* list = std::get_if<std::vector<std::vector<double>>>(&found->second);
    return list == nullptr ? std::vector<std::vector<double>>{} : *list;
}

std::shared_ptr<const SignalFile> ParameterValues::signal_file(std::string_view name) const {
    const auto found = values_.find(name);
    if (found == values_.end()) return nullptr;
    const auto* file = std::get_if<std::shared_ptr<const SignalFile>>(&found->second);
    return file == nullptr ? nullptr : *file;
}

std::vector<StimulusWords> ParameterValues::stimuli(std::string_view name) const {
    const auto found = values_.find(name);
    if (found == values_.end()) return {};
    const auto* list = std::get_if<std::shared_ptr<const std::vector<StimulusWords>>>(&found->second);
    return list == nullptr || *list == nullptr ? std::vector<StimulusWords>{} : **list;
}

const Recipe* find_recipe(const std::vector<Recipe>& recipes, std::string_view name) {
    const auto found = std::find_if(recipes.begin(), recipes.end(), [&](const Recipe& r) { return r.name == name; });
    return found == recipes.end() ? nullptr : &*found;
}

const Parameter* find_parameter(const Recipe& recipe, std::string_view name) {
    const auto found = std::find_if(recipe.parameters.begin(), recipe.parameters.end(),
                                    [&](const Parameter& p) { return p.name == name; });
    return found == recipe.parameters.end() ? nullptr : &*found;
}

}  // namespace halflsb
