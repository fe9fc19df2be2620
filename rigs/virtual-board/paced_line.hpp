// One direction of a serial line, in time: a start bit, eight data bits and a stop bit for each byte. Bytes are counted
// on one clock, so late wake-ups do not add up; time without a byte is idle.
#pragma once

#include <cstddef>
#include <cstdint>

namespace halflsb::board {

/// Nanoseconds of a monotonic clock.
using Nanoseconds = std::int64_t;
Nanoseconds now_ns();

class PacedLine {
public:
    /// baud 0: as fast as it goes.
    explicit PacedLine(std::uint32_t baud) : baud_(baud) {}

    bool is_paced() const { return baud_ != 0; }
    /// How many bytes have had the time to pass since the last that did.
    std::size_t due(Nanoseconds now) const;
    void passed(std::size_t bytes);
    /// There was nothing to pass: the next byte begins at `now` or later.
    void idle(Nanoseconds now);
    /// When `bytes` more will have passed.
    Nanoseconds time_of(std::size_t bytes) const;

    std::uint64_t bytes() const { return bytes_; }
    Nanoseconds idle_ns() const { return idle_ns_; }

private:
    static constexpr Nanoseconds ten_seconds_ns = 10'000'000'000;
    static constexpr std::int64_t bits_per_byte_ns = ten_seconds_ns;  // 10 bits x 1e9 ns

    std::uint32_t baud_;
    Nanoseconds base_ns_ = 0;
    std::int64_t since_base_ = 0;  // bytes
    std::uint64_t bytes_ = 0;
    Nanoseconds idle_ns_ = 0;
};

}  // namespace halflsb::board
