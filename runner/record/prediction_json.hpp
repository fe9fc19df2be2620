// A prediction as the value of "prediction" in the answer of predict; docs/json.md has the keys. Inside runner/record
// only.
#pragma once

#include "runner/record/json_parts.hpp"
#include "runner/world/prediction.hpp"

namespace halflsb {

Json prediction_json(const Prediction& prediction);

}  // namespace halflsb
