// Two runs side by side, as JSON (docs/answer.schema.json).
#pragma once

#include "runner/record/json_parts.hpp"
#include "runner/world/comparison.hpp"

namespace halflsb {

Json comparison_json(const Comparison& comparison);

}  // namespace halflsb
