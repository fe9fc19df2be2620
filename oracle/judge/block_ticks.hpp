// What the board's own counter says of the time that its filter takes, block by block (docs/wire.md, Ticks).
#pragma once

#include <cstdint>
#include <span>
#include <vector>

#include "stimuli/sample_format.hpp"

namespace halflsb {

/// The counter as the board's greeting has it; all 0 when it has none.
struct TickCounter {
    std::uint32_t hz = 0;
    int bits = 0;
};

/// Of the answer to one block.
struct BlockTicks {
    std::int64_t samples = 0;   ///< sent
    std::uint32_t total = 0;    ///< what the filter took for all of them
    std::uint32_t largest = 0;  ///< of one sample; most_ticks_told stands for itself and all beyond
    bool operator==(const BlockTicks&) const = default;
};

/// As a run keeps them: a row of i32 codes a block, samples, total and largest; the total as the 32 bits of a number
/// without sign.
inline constexpr int columns_of_ticks = 3;
SampleFormat format_of_ticks();
std::vector<Code> codes_of_ticks(std::span<const BlockTicks> blocks);
/// codes.size() is a multiple of columns_of_ticks.
std::vector<BlockTicks> ticks_of_codes(std::span<const Code> codes);

}  // namespace halflsb
