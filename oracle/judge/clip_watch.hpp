// Whether the response was cut off at the end of its word: what clips has no frequency response, no transition, no
// tone.
//
// A sample counts when it stands at an end of the output's range and the design does not: beyond it, where the board
// had to clip, or further inside, where it should not have.
#pragma once

#include <cstdint>
#include <string>

#include "oracle/judge/rule_judge.hpp"

namespace halflsb {

class ClipWatch {
public:
    explicit ClipWatch(const SampleFormat& output);
    /// The block's design reference must be there.
    void add(const AlignedBlock& block);
    std::int64_t count() const { return count_; }
    /// Why nothing can be said, and what to do about it; "" where nothing clipped.
    std::string reason() const;

private:
    bool has_ends_;  ///< floats beyond their range are infinite, which is told otherwise
    double lowest_, highest_, slack_;
    std::int64_t count_ = 0, first_index_ = -1;
};

}  // namespace halflsb
