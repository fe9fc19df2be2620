// Pieces of JSON that several documents share. Inside runner/record only.
#pragma once

#include <cmath>
#include <nlohmann/json.hpp>
#include <optional>
#include <string>
#include <string_view>

#include "runner/world/result.hpp"

namespace halflsb {

using Json = nlohmann::ordered_json;

/// Not measured is null; NaN and infinity never appear.
inline Json number_json(std::optional<double> value) {
    return value && std::isfinite(*value) ? Json(*value) : Json(nullptr);
}

/// What was not given is null, not "".
inline Json text_json(std::string_view value) { return value.empty() ? Json(nullptr) : Json(value); }

/// "usage", "input", "bench", "output", "interrupted", "defect".
std::string_view name_of(ErrorKind kind);
std::optional<ErrorKind> error_kind_of(std::string_view name);

/// kind, place, problem, remedy; null without an error.
Json error_json(const std::optional<Error>& error);

Json signal_json(const Signal& signal);

/// The plan of a run: its file, hash, root, and the files it was read from.
Json plan_json(const RunResult& run);

/// The words of a stimulus as the plan gave them: numbers, texts and arrays of them, a stimulus inside as
/// {"shape", "recipe"} again, a file of samples as its path.
Json recipe_json(const ParameterValues& values);

}  // namespace halflsb
