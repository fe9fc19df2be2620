// What explains a run, as JSON (docs/answer.schema.json).
#pragma once

#include "runner/record/json_parts.hpp"
#include "runner/world/explanation.hpp"

namespace halflsb {

Json explanation_json(const Explanation& explanation);

}  // namespace halflsb
