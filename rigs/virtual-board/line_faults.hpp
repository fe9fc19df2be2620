// Faults of the line and of how the board behaves on it, at the level of bytes. They know nothing of filters.
#pragma once

#include <cstddef>
#include <cstdint>
#include <vector>

namespace halflsb::board {

/// 0 and false: the line is right. "Every" counts bytes in one direction, from 1.
struct LineFaults {
    std::uint64_t flip_every = 0, drop_every = 0, repeat_every = 0;  ///< toward the host
    std::uint64_t flip_in_every = 0, drop_in_every = 0;              ///< toward the board
    std::uint64_t stall_every = 0;                                   ///< toward the host
    std::uint32_t stall_ms = 0;
    bool garbage = false;              ///< a boot message at power-up and before the first answer
    bool silent = false;               ///< listens, never answers
    bool first_stream_silent = false;  ///< the first stream gets no answer, all else does
    bool echo_only = false;            ///< returns each byte as it came
    bool wrong_build_id = false;       ///< greets with another image's
    std::uint64_t unplug_after = 0;    ///< answers of blocks, then the device is gone
    std::uint64_t restart_after = 0;   ///< blocks, then the board starts anew, once
};

/// The bytes of one direction, each nth flipped in one bit (which bit goes round), lost, or doubled.
class SpoiltDirection {
public:
    SpoiltDirection(std::uint64_t flip_every, std::uint64_t drop_every, std::uint64_t repeat_every)
        : flip_every_(flip_every), drop_every_(drop_every), repeat_every_(repeat_every) {}

    void append(const std::uint8_t* bytes, std::size_t count, std::vector<std::uint8_t>& to);

private:
    std::uint64_t flip_every_, drop_every_, repeat_every_;
    std::uint64_t passed_ = 0, flipped_ = 0;
};

/// Tells the answers to the first stream after power-up: whoever asks again in a stream of its own is answered.
class FirstStream {
public:
    /// Of one answer of the kit, as it goes onto the line, in the order in which they come.
    bool has(const std::vector<std::uint8_t>& answer);

private:
    std::vector<std::uint8_t> started_;  // the first STARTED
    bool is_over_ = false;
};

/// What a board says that was never asked: text, a delimiter in the middle, bytes of no meaning.
std::vector<std::uint8_t> boot_message();

}  // namespace halflsb::board
