// What predict prints for people: a section for each question, in compact tables. Functions of the prediction and the
// style of the terminal alone; text from a plan is escaped.
#pragma once

#include <cstddef>
#include <optional>
#include <string>

#include "runner/report/text_style.hpp"
#include "runner/world/prediction.hpp"

namespace halflsb {

/// How the time on the wire was told; none without a rig.
struct WireOfPrediction {
    long baud = 0;
    std::size_t block_samples = 0;
};

std::string prediction_text(const Prediction& prediction, const std::optional<WireOfPrediction>& wire,
                            const TextStyle& style);

}  // namespace halflsb
