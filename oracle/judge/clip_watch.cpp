#include "oracle/judge/clip_watch.hpp"

#include <cmath>

namespace halflsb {

// 1.5 LSB: a filter that rounds its output once, anywhere from floor to ceiling, lies within 1 of the design.
ClipWatch::ClipWatch(const SampleFormat& output)
    : has_ends_(output.has_lsb()),
      lowest_(lowest_value(output)),
      highest_(highest_value(output)),
      slack_(output.has_lsb() ? 1.5 * lsb_value(output) : 0.0) {}

void ClipWatch::add(const AlignedBlock& block) {
    if (!has_ends_) return;
    for (std::size_t i = 0; i < block.values.size(); ++i) {
        const double value = block.values[i];
        if (value > lowest_ && value < highest_) continue;
        if (std::fabs(value - block.reference.design[i]) <= slack_) continue;
        if (count_++ == 0) first_index_ = block.first_index + static_cast<std::int64_t>(i);
    }
}

std::string ClipWatch::reason() const {
    if (count_ == 0) return {};
    return std::to_string(count_) + (count_ == 1 ? " sample stands" : " samples stand") +
           " at the end of the output's range, " + "the first is " + std::to_string(first_index_) +
           ", and the design does not: what clips cannot be judged by this rule; lower the level of the stimulus";
}

}  // namespace halflsb
