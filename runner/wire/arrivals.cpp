#include "runner/wire/arrivals.hpp"

#include <algorithm>
#include <cstdio>

#include "runner/wire/messages.hpp"

namespace halflsb {

std::string with_thousands(std::int64_t count) {
    const std::string digits = std::to_string(count);
    std::string text;
    for (std::size_t k = 0; k < digits.size(); ++k) {
        if (k > 0 && (digits.size() - k) % 3 == 0) text += ',';
        text += digits[k];
    }
    return text;
}

std::string in_seconds(Duration duration) {
    const std::int64_t tenths = (std::chrono::duration_cast<std::chrono::milliseconds>(duration).count() + 50) / 100;
    return std::to_string(tenths / 10) + "." + std::to_string(tenths % 10) + " s";
}

void Arrivals::start_over() { *this = Arrivals{}; }

void Arrivals::add_bytes(std::span<const std::byte> bytes) {
    for (const std::byte byte : bytes) tail_[static_cast<std::size_t>(bytes_++) % tail_.size()] = byte;
}

void Arrivals::add_frame(std::uint8_t type) {
    if (message::is_for_the_board(type)) {
        ++echoed_frames_;
        return;
    }
    ++good_frames_;
    last_type_ = type;
}

std::size_t Arrivals::tail_size() const { return std::min(static_cast<std::size_t>(bytes_), tail_.size()); }

std::uint8_t Arrivals::tail_byte(std::size_t k) const {
    const std::size_t first = static_cast<std::size_t>(bytes_) - tail_size();
    return std::to_integer<std::uint8_t>(tail_[(first + k) % tail_.size()]);
}

bool Arrivals::is_text() const {
    for (std::size_t k = 0; k < tail_size(); ++k) {
        const std::uint8_t byte = tail_byte(k);
        const bool is_printable = byte >= 0x20 && byte < 0x7F;
        if (!is_printable && byte != '\r' && byte != '\n' && byte != '\t') return false;
    }
    return tail_size() > 0;
}

std::string Arrivals::quoted_tail() const {
    std::string text = "\"";
    for (std::size_t k = 0; k < tail_size(); ++k) {
        const char byte = static_cast<char>(tail_byte(k));
        switch (byte) {
            case '\r':
                text += "\\r";
                break;
            case '\n':
                text += "\\n";
                break;
            case '\t':
                text += "\\t";
                break;
            case '"':
                text += "\\\"";
                break;
            case '\\':
                text += "\\\\";
                break;
            default:
                text += byte;
        }
    }
    return text + "\"";
}

std::string Arrivals::hex_tail() const {
    std::string text;
    for (std::size_t k = 0; k < tail_size(); ++k) {
        char pair[4];
        std::snprintf(pair, sizeof pair, "%02x", static_cast<unsigned>(tail_byte(k)));
        if (k > 0) text += ' ';
        text += pair;
    }
    return text;
}

std::string Arrivals::text() const {
    if (bytes_ == 0) return "nothing came";
    const std::string count = with_thousands(bytes_) + (bytes_ == 1 ? " byte came" : " bytes came");
    if (is_echo()) return count + ", the same as was sent: it looks like an echo";
    if (good_frames_ > 0)
        return count + " with " + with_thousands(good_frames_) + (good_frames_ == 1 ? " good frame" : " good frames") +
               ", the last " + message::name_of(last_type_);
    const std::string dots = bytes_ > static_cast<std::int64_t>(tail_.size()) ? "… " : "";
    return count + " and no whole frame, the last: " + dots + (is_text() ? quoted_tail() : hex_tail());
}

std::string Arrivals::remedy(long baud) const {
    const std::string rate = baud > 0 ? " at " + std::to_string(baud) + " baud" : "";
    if (bytes_ == 0)
        return "is the board powered, is firmware with the kit running on it, and are TX and RX crossed" + rate + "?";
    if (is_echo()) return "are TX and RX joined, or does a terminal server return what it gets?";
    if (good_frames_ > 0) return "look at the board: is it busy, or does it drop what it receives?";
    if (is_text()) return "text comes on this port: is it the right one, and is the firmware built with the kit?";
    return baud > 0 ? "does the firmware run the line at " + std::to_string(baud) + " baud, 8 data bits, no parity?"
                    : "is this the board's port, and is the firmware built with the kit?";
}

}  // namespace halflsb
