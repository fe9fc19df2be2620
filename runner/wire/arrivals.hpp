// What came while something else was awaited: for the messages of waits that ended in vain.
#pragma once

#include <array>
#include <cstddef>
#include <cstdint>
#include <span>
#include <string>

#include "runner/world/clock.hpp"

namespace halflsb {

/// "1,204"
std::string with_thousands(std::int64_t count);
/// "2.0 s", the same in every locale.
std::string in_seconds(Duration duration);

class Arrivals {
public:
    void start_over();
    void add_bytes(std::span<const std::byte> bytes);
    void add_frame(std::uint8_t type);

    /// "nothing came", or how much came and what it looked like.
    std::string text() const;
    /// What to look at first; `baud` 0 where the line has no rate.
    std::string remedy(long baud) const;

private:
    bool is_echo() const { return echoed_frames_ > 0; }
    bool is_text() const;
    std::string quoted_tail() const;
    std::string hex_tail() const;
    std::size_t tail_size() const;
    std::uint8_t tail_byte(std::size_t k) const;

    std::int64_t bytes_ = 0, good_frames_ = 0, echoed_frames_ = 0;
    std::uint8_t last_type_ = 0;
    std::array<std::byte, 24> tail_{};  ///< a ring: byte k of the stream at k modulo its size
};

}  // namespace halflsb
