#include "rigs/virtual-board/paced_line.hpp"

#include <chrono>
#include <limits>

namespace halflsb::board {

Nanoseconds now_ns() {
    return std::chrono::duration_cast<std::chrono::nanoseconds>(std::chrono::steady_clock::now().time_since_epoch())
        .count();
}

std::size_t PacedLine::due(Nanoseconds now) const {
    if (!is_paced()) return std::numeric_limits<std::size_t>::max();
    // In seconds and the rest, so that the product stays within 64 bits however long the board slept.
    const Nanoseconds elapsed = now - base_ns_;
    if (elapsed <= 0) return 0;
    const std::int64_t whole =
        (elapsed / ten_seconds_ns) * baud_ + (elapsed % ten_seconds_ns) / 1000 * baud_ / (ten_seconds_ns / 1000);
    return whole > since_base_ ? static_cast<std::size_t>(whole - since_base_) : 0;
}

void PacedLine::passed(std::size_t bytes) {
    bytes_ += bytes;
    if (!is_paced()) return;
    since_base_ += static_cast<std::int64_t>(bytes);
    // Ten seconds carry exactly `baud` bytes: the base moves without a rounding.
    while (since_base_ >= static_cast<std::int64_t>(baud_)) {
        since_base_ -= baud_;
        base_ns_ += ten_seconds_ns;
    }
}

Nanoseconds PacedLine::time_of(std::size_t bytes) const {
    if (!is_paced()) return 0;
    return base_ns_ + (since_base_ + static_cast<std::int64_t>(bytes)) * bits_per_byte_ns / baud_ + 1;
}

void PacedLine::idle(Nanoseconds now) {
    if (!is_paced()) return;
    const Nanoseconds free_since = time_of(0);
    if (now <= free_since) return;
    if (base_ns_ != 0) idle_ns_ += now - free_since;
    base_ns_ = now;
    since_base_ = 0;
}

}  // namespace halflsb::board
