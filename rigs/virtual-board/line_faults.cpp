#include "rigs/virtual-board/line_faults.hpp"

#include <string_view>

namespace halflsb::board {

void SpoiltDirection::append(const std::uint8_t* bytes, std::size_t count, std::vector<std::uint8_t>& to) {
    if (flip_every_ == 0 && drop_every_ == 0 && repeat_every_ == 0) {
        to.insert(to.end(), bytes, bytes + count);
        return;
    }
    for (const std::uint8_t* end = bytes + count; bytes != end; ++bytes) {
        ++passed_;
        if (drop_every_ != 0 && passed_ % drop_every_ == 0) continue;
        std::uint8_t byte = *bytes;
        if (flip_every_ != 0 && passed_ % flip_every_ == 0) {
            byte = static_cast<std::uint8_t>(byte ^ (1u << (flipped_++ % 8)));
        }
        to.push_back(byte);
        if (repeat_every_ != 0 && passed_ % repeat_every_ == 0) to.push_back(byte);
    }
}

bool FirstStream::has(const std::vector<std::uint8_t>& answer) {
    // docs/wire.md: answers outside the stream begin with a delimiter; then COBS puts one byte before the type.
    constexpr std::uint8_t started = 0x82, response = 0x90, done = 0x91, expect = 0x92;
    const std::size_t type_at = !answer.empty() && answer[0] == 0 ? 2 : 1;
    if (answer.size() <= type_at) return false;
    const std::uint8_t type = answer[type_at];
    if (type == started) {
        // The same START asked again has the same answer, and opens no other stream.
        if (started_.empty()) started_ = answer;
        is_over_ = is_over_ || answer != started_;
    }
    return !is_over_ && (type == response || type == done || type == expect);
}

std::vector<std::uint8_t> boot_message() {
    constexpr std::string_view text = "\r\nCW-7 load cell, loader 1.4\r\nself test ok\r\n";
    std::vector<std::uint8_t> message(text.begin(), text.end());
    for (int value : {0x00, 0xFF, 0x7E, 0x03, 0x90, 0x00, 0x05, 0x81, 0x11, 0x13}) {
        message.push_back(static_cast<std::uint8_t>(value));
    }
    return message;
}

}  // namespace halflsb::board
