#include "runner/record/json_parts.hpp"

#include <array>
#include <utility>
#include <variant>

#include "runner/world/sha256.hpp"

namespace halflsb {

namespace {

constexpr std::array<std::pair<ErrorKind, std::string_view>, 6> kinds{{{ErrorKind::usage, "usage"},
                                                                       {ErrorKind::input, "input"},
                                                                       {ErrorKind::bench, "bench"},
                                                                       {ErrorKind::output, "output"},
                                                                       {ErrorKind::interrupted, "interrupted"},
                                                                       {ErrorKind::defect, "defect"}}};

struct ValueJson {
    Json operator()(std::int64_t value) const { return value; }
    Json operator()(double value) const { return number_json(value); }
    Json operator()(const std::string& value) const { return value; }
    Json operator()(const std::vector<double>& values) const {
        Json array = Json::array();
        for (const double value : values) array.push_back(number_json(value));
        return array;
    }
    Json operator()(const std::vector<std::vector<double>>& rows) const {
        Json array = Json::array();
        for (const auto& row : rows) array.push_back((*this)(row));
        return array;
    }
    // The samples of a file are hashed with the stimulus and kept in a file of their own.
    Json operator()(const std::shared_ptr<const SignalFile>& file) const {
        return file == nullptr ? Json(nullptr) : Json(file->path);
    }
    Json operator()(const std::shared_ptr<const std::vector<StimulusWords>>& stimuli) const {
        Json array = Json::array();
        if (stimuli == nullptr) return array;
        for (const StimulusWords& words : *stimuli)
            array.push_back({{"shape", words.shape}, {"recipe", recipe_json(words.values)}});
        return array;
    }
};

}  // namespace

std::string_view name_of(ErrorKind kind) {
    for (const auto& [known, name] : kinds) {
        if (known == kind) return name;
    }
    return "defect";
}

std::optional<ErrorKind> error_kind_of(std::string_view name) {
    for (const auto& [kind, known] : kinds) {
        if (known == name) return kind;
    }
    return std::nullopt;
}

Json error_json(const std::optional<Error>& error) {
    if (!error) return nullptr;
    return {{"kind", name_of(error->kind)},
            {"place", text_json(error->place)},
            {"problem", error->problem},
            {"remedy", text_json(error->remedy)}};
}

Json recipe_json(const ParameterValues& values) {
    Json recipe = Json::object();
    for (const auto& [name, value] : values.all()) recipe[name] = std::visit(ValueJson{}, value);
    return recipe;
}

Json signal_json(const Signal& signal) {
    return {{"rate_hz", number_json(signal.rate_hz)},
            {"input", text_of(signal.input)},
            {"output", text_of(signal.output)},
            {"channels", signal.channels},
            {"output_per_input", number_json(signal.output_per_input)},
            {"filter", text_json(signal.filter)},
            {"unit", text_json(signal.unit)},
            {"full_scale_unit", number_json(signal.full_scale_unit)},
            {"input_unit", text_json(signal.input_unit)},
            {"input_full_scale_unit", number_json(signal.input_full_scale_unit)},
            {"quantise", name_of(signal.quantise)}};
}

Json plan_json(const RunResult& run) {
    Json files = Json::array();
    for (const PlanPart& part : run.plan_parts) {
        if (!part.path.empty()) files.push_back({{"path", part.path}, {"sha256", sha256_of_text(part.bytes)}});
    }
    return {{"file", run.plan_file},
            {"sha256", text_json(run.plan_sha256)},
            {"root", text_json(run.root)},
            {"files", std::move(files)}};
}

}  // namespace halflsb
