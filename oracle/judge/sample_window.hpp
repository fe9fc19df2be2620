// A stretch of the response that a rule looks at, and what of a block lies in it.
#pragma once

#include <algorithm>
#include <cstdint>

#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

/// Indices of the response.
struct SampleWindow {
    std::int64_t begin = 0, end = 0;
    std::int64_t samples() const { return end > begin ? end - begin : 0; }
};

inline AlignedBlock within(const AlignedBlock& block, const SampleWindow& window) {
    const auto size = static_cast<std::int64_t>(block.values.size());
    const auto from = static_cast<std::size_t>(std::clamp<std::int64_t>(window.begin - block.first_index, 0, size));
    const auto to = static_cast<std::size_t>(std::clamp<std::int64_t>(window.end - block.first_index, 0, size));
    const std::size_t count = to > from ? to - from : 0;
    return {block.first_index + static_cast<std::int64_t>(from), block.reference.after(from).first(count),
            block.codes.subspan(from, count), block.values.subspan(from, count)};
}

}  // namespace halflsb
