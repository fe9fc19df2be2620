// Frames of the framed wire (docs/wire.md §1): COBS(type | body | CRC-32) 0x00. Pure, no waiting.
//
// COBS: Cheshire and Baker, "Consistent Overhead Byte Stuffing", IEEE/ACM Transactions on Networking 7(2),
// 1999. CRC-32/ISO-HDLC: check value of "123456789" 0xCBF43926.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <vector>

namespace halflsb {

std::uint32_t crc32(std::span<const std::byte> bytes);

/// Appends COBS(content), without the delimiter. A final full group of 254 bytes gets no trailing 0x01.
void append_cobs(std::vector<std::byte>& out, std::span<const std::byte> content);

/// Appends a whole frame with its delimiter.
void append_frame(std::vector<std::byte>& out, std::uint8_t type, std::span<const std::byte> body);

/// Type and CRC.
constexpr std::size_t content_overhead_bytes = 5;

/// The most bytes that a frame with this body takes on the line: COBS adds 1 + floor(content / 254), the
/// delimiter 1. It takes exactly that many unless zeros lie among more than 253 bytes of content.
constexpr std::size_t largest_frame_bytes(std::size_t body_bytes) {
    const std::size_t content = body_bytes + content_overhead_bytes;
    return content + 1 + content / 254 + 1;
}

/// Takes bytes as they come and gives frames back. Memory is fixed at construction.
class FrameDecoder {
public:
    struct Frame {
        std::uint8_t type = 0;
        std::span<const std::byte> body;  ///< valid until the next call of next()
    };

    /// Longer content is counted as a bad frame.
    explicit FrameDecoder(std::size_t max_content_bytes);

    /// Consumes from the front of `bytes` up to the end of the next good frame; nothing when they are
    /// used up. Empty frames are skipped, bad ones are counted and dropped.
    std::optional<Frame> next(std::span<const std::byte>& bytes);

    std::int64_t frames_good() const { return frames_good_; }
    std::int64_t frames_bad() const { return frames_bad_; }

private:
    void take(std::uint8_t byte);
    void append(std::byte byte);
    std::optional<Frame> finish();
    void start_over();

    std::vector<std::byte> content_;
    std::size_t size_ = 0;
    bool empty_ = true;  ///< no byte since the last delimiter
    bool too_long_ = false;
    std::uint8_t left_ = 0;      ///< data bytes that the current group still has
    bool zero_follows_ = false;  ///< the current group stands for a zero, unless it is the last one
    std::int64_t frames_good_ = 0, frames_bad_ = 0;
};

}  // namespace halflsb
