#include "oracle/judge/sent_block.hpp"

namespace halflsb {

void SentBlock::take(std::int64_t first_index, std::size_t instants) {
    driven_.resize(instants);
    silent_.assign(instants, zero_code(plan_.signal.input));
    fill_codes(*case_.stimulus, plan_.signal.input, plan_.signal.quantise, first_index, driven_);
}

std::span<const Code> SentBlock::of_channel(int channel) const { return is_driven(case_, channel) ? driven_ : silent_; }

std::span<const Code> SentBlock::of_all() {
    if (plan_.signal.channels == 1) return driven_;
    const auto channels = static_cast<std::size_t>(plan_.signal.channels);
    all_.resize(driven_.size() * channels);
    for (std::size_t c = 0; c < channels; ++c) {
        const auto one = of_channel(static_cast<int>(c) + 1);
        for (std::size_t i = 0; i < one.size(); ++i) all_[i * channels + c] = one[i];
    }
    return all_;
}

std::span<const Code> one_channel(std::span<const Code> codes, int channels, int channel, std::vector<Code>& room) {
    if (channels == 1) return codes;
    const auto stride = static_cast<std::size_t>(channels);
    room.resize(codes.size() / stride);
    for (std::size_t i = 0, at = static_cast<std::size_t>(channel - 1); i < room.size(); ++i, at += stride)
        room[i] = codes[at];
    return room;
}

}  // namespace halflsb
