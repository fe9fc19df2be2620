// What travels between the stages: some consecutive samples of one channel and where they stand in
// the signal. Nothing holds a whole signal unless it must.
#pragma once

#include <cstdint>
#include <span>

namespace halflsb {

/// A view; the owner of `samples` outlives it.
template <class T>
struct Block {
    std::int64_t first_index = 0;  ///< the index of samples[0] in the signal
    std::span<T> samples;

    std::int64_t end_index() const { return first_index + static_cast<std::int64_t>(samples.size()); }
};

}  // namespace halflsb
