// The part of a prediction that follows from the promised arithmetic. Inside runner/report only.
#pragma once

#include <string>

#include "runner/report/text_style.hpp"
#include "runner/world/prediction.hpp"

namespace halflsb {

/// " LSB", or "" where the output has none.
std::string unit_text(const Signal& signal);

/// What the plan does not say, for the first lines; "" where it says everything. `channels` stands in front, "" or
/// "channel 2: ".
std::string assumed_text(const PredictedArithmetic& told, const Signal& signal, const std::string& channels,
                         const TextStyle& style);

/// Points, sums, and the cases that have other sums.
std::string bound_text(const PredictedArithmetic& told, const Signal& signal, const TextStyle& style);

/// Nodes with their words, the stimuli that drive them hardest, and the words that would do.
std::string headroom_text(const PredictedArithmetic& told, const TextStyle& style);

/// What remains when the input has ended.
std::string silence_text(const PredictedArithmetic& told, const Signal& signal, const TextStyle& style);

}  // namespace halflsb
