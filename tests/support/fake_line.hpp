// One direction of a byte line in fake time: a rate, a buffer in front of it, and faults on request.
#pragma once

#include <algorithm>
#include <cstddef>
#include <deque>
#include <optional>
#include <random>
#include <span>
#include <string>
#include <vector>

#include "runner/world/clock.hpp"

namespace halflsb::test {

using Bytes = std::vector<std::byte>;

enum class LineFault { none, drop, lose, flip, repeat, split, merge, stall, garbage };

inline std::string name_of(LineFault fault) {
    switch (fault) {
        case LineFault::none:
            return "none";
        case LineFault::drop:
            return "drop a byte";
        case LineFault::lose:
            return "lose a transfer";
        case LineFault::flip:
            return "flip a bit";
        case LineFault::repeat:
            return "repeat a byte";
        case LineFault::split:
            return "split a transfer";
        case LineFault::merge:
            return "merge with the next transfer";
        case LineFault::stall:
            return "stall";
        case LineFault::garbage:
            return "garbage in front";
    }
    return "?";
}

class FakeLine {
public:
    struct Fault {
        LineFault kind = LineFault::none;
        bool from_now_on = false;
        int nth = 1;  ///< transfer that it meets, from 1
    };

    /// 0: bytes arrive at once.
    void set_baud(long baud) { baud_ = baud; }
    void set_fault(Fault fault) { fault_ = fault; }
    bool fault_has_fired() const { return fired_; }
    int transfers() const { return transfers_; }

    /// How many bytes the buffer takes now.
    std::size_t room(Instant now) const {
        if (baud_ == 0) return buffer_bytes;
        const Duration busy = std::max(free_at_ - now, Duration::zero());
        const auto waiting = static_cast<std::size_t>(busy / byte_time());
        return waiting >= buffer_bytes ? 0 : buffer_bytes - waiting;
    }

    void put(std::span<const std::byte> bytes, Instant now) {
        if (bytes.empty()) return;
        ++transfers_;
        Bytes chunk(bytes.begin(), bytes.end());
        const bool fires = fault_.kind != LineFault::none &&
                           (transfers_ == fault_.nth || (fault_.from_now_on && transfers_ > fault_.nth));
        if (!held_.empty() && !(fires && fault_.kind == LineFault::merge)) {
            chunk.insert(chunk.begin(), held_.begin(), held_.end());
            held_.clear();
        }
        if (!fires) return transmit(chunk, now);
        fired_ = true;
        const std::size_t at = static_cast<std::size_t>(transfers_) * 7 % chunk.size();
        const auto place = chunk.begin() + static_cast<std::ptrdiff_t>(at);
        switch (fault_.kind) {
            case LineFault::drop:
                chunk.erase(place);
                break;
            case LineFault::lose:
                return;
            case LineFault::flip:
                *place ^= std::byte{1} << (transfers_ % 8);
                break;
            case LineFault::repeat:
                chunk.insert(place, *place);
                break;
            case LineFault::split:
                transmit(std::span(chunk).first(at), now);
                later_ += std::chrono::milliseconds(10);
                return transmit(std::span(chunk).subspan(at), now);
            case LineFault::merge:
                // Every second one is let go, or nothing would ever arrive.
                if (held_.empty()) {
                    held_ = chunk;
                    return;
                }
                chunk.insert(chunk.begin(), held_.begin(), held_.end());
                held_.clear();
                break;
            case LineFault::stall:
                if (fault_.from_now_on) return;
                later_ += std::chrono::milliseconds(400);
                break;
            case LineFault::garbage: {
                Bytes garbage(1 + random_() % 40);
                for (std::byte& byte : garbage) byte = static_cast<std::byte>(random_() & 0xFF);
                chunk.insert(chunk.begin(), garbage.begin(), garbage.end());
                break;
            }
            case LineFault::none:
                break;
        }
        transmit(chunk, now);
    }

    std::optional<Instant> next_arrival() const {
        return arriving_.empty() ? std::nullopt : std::optional(arriving_.front().at);
    }

    std::size_t take(std::span<std::byte> to_fill, Instant now) {
        std::size_t taken = 0;
        while (taken < to_fill.size() && !arriving_.empty() && arriving_.front().at <= now) {
            Piece& piece = arriving_.front();
            const std::size_t count = std::min(to_fill.size() - taken, piece.bytes);
            std::copy_n(bytes_.begin() + static_cast<std::ptrdiff_t>(first_), count,
                        to_fill.begin() + static_cast<std::ptrdiff_t>(taken));
            piece.bytes -= count;
            first_ += count;
            taken += count;
            if (piece.bytes == 0) arriving_.pop_front();
        }
        if (arriving_.empty()) {
            bytes_.clear();
            first_ = 0;
        } else if (first_ > 2 * buffer_bytes) {
            bytes_.erase(bytes_.begin(), bytes_.begin() + static_cast<std::ptrdiff_t>(first_));
            first_ = 0;
        }
        return taken;
    }

    /// Time in which the line carried nothing although it had begun; for the idle share.
    Duration idle() const { return idle_; }

private:
    static constexpr std::size_t buffer_bytes = 4096, piece_bytes = 16;

    struct Piece {
        Instant at;
        std::size_t bytes;
    };

    Duration byte_time() const { return Duration(10'000'000'000LL / baud_); }

    void transmit(std::span<const std::byte> bytes, Instant now) {
        const std::size_t step = baud_ == 0 ? bytes.size() : piece_bytes;
        for (std::size_t at = 0; at < bytes.size(); at += step) {
            const std::span<const std::byte> part = bytes.subspan(at, std::min(step, bytes.size() - at));
            if (baud_ != 0) {
                if (free_at_ != Instant{} && now > free_at_) idle_ += now - free_at_;
                free_at_ = std::max(free_at_, now) + static_cast<std::int64_t>(part.size()) * byte_time();
            }
            last_at_ = std::max(last_at_, std::max(free_at_, now) + later_);
            bytes_.insert(bytes_.end(), part.begin(), part.end());
            arriving_.push_back(Piece{last_at_, part.size()});
        }
        later_ = Duration::zero();
    }

    long baud_ = 0;
    Fault fault_;
    bool fired_ = false;
    int transfers_ = 0;
    Bytes held_;
    std::deque<Piece> arriving_;  ///< stretches of bytes_ from first_ on
    Bytes bytes_;
    std::size_t first_ = 0;
    Instant free_at_{}, last_at_{};
    Duration later_{}, idle_{};
    std::minstd_rand random_{20261201};
};

}  // namespace halflsb::test
