// The frames of a stream that are sent and not yet answered (docs/wire.md §3, Credit and Loss): numbers,
// what each frame was, and its bytes for sending again. Knows no link and no clock.
//
// Frames are numbered from 0 without wrapping here; 16 bits of that number travel.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <vector>

#include "runner/wire/messages.hpp"
#include "runner/world/clock.hpp"

namespace halflsb {

class StreamWindow {
public:
    struct Frame {
        message::Type type = message::Type::samples;
        std::int64_t at = 0;        ///< sample index that it starts at, or takes effect before
        std::int64_t samples = 0;   ///< 0 for a command
        std::int64_t returned = 0;  ///< how many its answer must have
        Instant queued_at{};        ///< when it was ready to go
        std::vector<std::byte> bytes;
    };

    /// Where an answer's number stands.
    enum class Place {
        oldest,   ///< the one that is awaited
        later,    ///< of a frame in flight behind it: an answer in between got lost
        outside,  ///< answered before, or never sent
    };

    void open(int credit_blocks);
    void close();
    bool is_open() const { return !frames_.empty(); }

    bool has_room() const { return is_open() && in_flight() < frames_.size(); }
    std::size_t in_flight() const { return static_cast<std::size_t>(next_ - oldest_); }
    std::int64_t oldest_number() const { return oldest_; }
    std::uint16_t next_seq() const { return static_cast<std::uint16_t>(next_); }
    /// Needs in_flight() > 0.
    const Frame& oldest() const { return frame(oldest_); }
    /// The frame in flight that has this number; nullptr when none has.
    const Frame* find(std::uint16_t seq) const;

    /// The place of the next frame, to be filled in; it counts as in flight from now on. Needs has_room().
    Frame& push();
    /// The next frame that has to go out; nothing when all have.
    std::optional<std::span<const std::byte>> take_unsent();
    bool has_unsent() const { return unsent_ < next_; }

    Place place_of(std::uint16_t seq) const;
    /// True when the board's expected number is one that this host can send or would send next.
    bool may_be_expected(std::uint16_t seq) const;
    void answer_oldest();
    /// Everything unanswered goes out again.
    void rewind() { unsent_ = oldest_; }

private:
    const Frame& frame(std::int64_t number) const { return frames_[static_cast<std::size_t>(number) % frames_.size()]; }
    std::uint16_t distance(std::uint16_t seq) const {
        return static_cast<std::uint16_t>(seq - static_cast<std::uint16_t>(oldest_));
    }

    std::vector<Frame> frames_;  ///< as many as there is credit; number n lives at n modulo that
    std::int64_t oldest_ = 0, unsent_ = 0, next_ = 0;
};

}  // namespace halflsb
