// Twins that start with their first sample. Private to this room.
#pragma once

#include "oracle/arithmetic/stage_twin.hpp"

namespace halflsb {

/// `twin` of a stage whose Initial is first_sample, started as docs/arithmetic.md, "Starts", says. nullptr of nullptr.
std::unique_ptr<StageTwin> started_with_first_sample(std::unique_ptr<StageTwin> twin, const DescribedStage& stage);

}  // namespace halflsb
