// A filter that takes one code and gives one: the form in which faults are put around and into filters. A code is the
// raw integer of a sample; of f32, its bits.
#pragma once

#include <cstdint>

namespace halflsb::board {

class CodeFilter {
public:
    virtual ~CodeFilter() = default;
    virtual void reset() = 0;
    /// The reset of a firmware that clears only the first half of its state.
    virtual void reset_half() = 0;
    virtual std::int32_t step(std::int32_t x) = 0;
    /// Before the first sample of each block.
    virtual void begin_block() {}
};

}  // namespace halflsb::board
