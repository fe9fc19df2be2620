// What one channel does to another: boards that are right channel by channel, and mix them up.
#pragma once

#include <optional>
#include <vector>

#include "oracle/explain/capture_fit.hpp"

namespace halflsb {

struct ChannelBoard {
    BoardDescription declared;
    const std::vector<ChannelCapture>* captures = nullptr;  ///< of all channels the same cases
};

/// The first of these that reproduces all captures of the channel (from 0): its filter gets another channel's samples,
/// another channel's output is sent in its place, all channels pass one filter and share its state, a power of two of
/// another channel's input or output is added to its output. nullopt where none does.
std::optional<Candidate> channel_cause(const Signal& signal, const std::vector<ChannelBoard>& boards,
                                       std::size_t channel);

}  // namespace halflsb
