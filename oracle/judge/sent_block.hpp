// What the channels of a case were sent, block by block; and one channel out of several.
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "oracle/judge/plan.hpp"

namespace halflsb {

/// Most instants that the judge looks at together: with this bound its memory hangs on the channels alone.
inline constexpr std::size_t judge_block_samples = 4096;

class SentBlock {
public:
    /// The plan and the case must outlive the block.
    SentBlock(const Plan& plan, const Case& the_case) : plan_(plan), case_(the_case) {}
    /// Makes the codes of `instants` samples from first_index on; spans of the call before end.
    void take(std::int64_t first_index, std::size_t instants);
    /// Of a channel, counted from 1: the stimulus, or silence where it is not driven.
    std::span<const Code> of_channel(int channel) const;
    /// Of all channels, the codes of an instant adjacent, as fill_case_codes has them.
    std::span<const Code> of_all();

private:
    const Plan& plan_;
    const Case& case_;
    std::vector<Code> driven_, silent_, all_;
};

/// The codes of one channel, counted from 1, out of whole instants. With one channel `codes` itself, else a copy
/// in `room`.
std::span<const Code> one_channel(std::span<const Code> codes, int channels, int channel, std::vector<Code>& room);

}  // namespace halflsb
