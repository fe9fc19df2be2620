#include "runner/wire/frame.hpp"

#include <array>
#include <boost/crc.hpp>

namespace halflsb {
namespace {

constexpr std::size_t crc_bytes = 4;
constexpr std::size_t full_group_bytes = 254;

/// Lays COBS groups down as content comes, so that type, body and CRC need not be joined first.
class CobsWriter {
public:
    explicit CobsWriter(std::vector<std::byte>& out) : out_(out) { open_group(); }

    void add(std::span<const std::byte> bytes) {
        for (const std::byte byte : bytes) {
            // A full group is followed by another only when there is something to put into it.
            if (out_.size() - code_at_ > full_group_bytes) close_group(), open_group();
            if (byte == std::byte{0})
                close_group(), open_group();
            else
                out_.push_back(byte);
        }
    }

    void finish() { close_group(); }

private:
    void open_group() {
        code_at_ = out_.size();
        out_.push_back(std::byte{0});
    }
    void close_group() { out_[code_at_] = static_cast<std::byte>(out_.size() - code_at_); }

    std::vector<std::byte>& out_;
    std::size_t code_at_ = 0;
};

std::array<std::byte, crc_bytes> little_endian(std::uint32_t value) {
    return {static_cast<std::byte>(value & 0xFF), static_cast<std::byte>((value >> 8) & 0xFF),
            static_cast<std::byte>((value >> 16) & 0xFF), static_cast<std::byte>((value >> 24) & 0xFF)};
}

}  // namespace

std::uint32_t crc32(std::span<const std::byte> bytes) {
    boost::crc_32_type crc;
    crc.process_bytes(bytes.data(), bytes.size());
    return static_cast<std::uint32_t>(crc.checksum());
}

void append_cobs(std::vector<std::byte>& out, std::span<const std::byte> content) {
    CobsWriter writer(out);
    writer.add(content);
    writer.finish();
}

void append_frame(std::vector<std::byte>& out, std::uint8_t type, std::span<const std::byte> body) {
    const std::byte type_byte{type};
    boost::crc_32_type crc;
    crc.process_byte(type);
    crc.process_bytes(body.data(), body.size());
    out.reserve(out.size() + largest_frame_bytes(body.size()));
    CobsWriter writer(out);
    writer.add({&type_byte, 1});
    writer.add(body);
    writer.add(little_endian(static_cast<std::uint32_t>(crc.checksum())));
    writer.finish();
    out.push_back(std::byte{0});
}

FrameDecoder::FrameDecoder(std::size_t max_content_bytes) : content_(max_content_bytes) {}

void FrameDecoder::start_over() {
    size_ = 0;
    empty_ = true;
    too_long_ = false;
    left_ = 0;
    zero_follows_ = false;
}

void FrameDecoder::append(std::byte byte) {
    if (size_ == content_.size())
        too_long_ = true;
    else
        content_[size_++] = byte;
}

void FrameDecoder::take(std::uint8_t byte) {
    empty_ = false;
    if (left_ > 0) {
        append(std::byte{byte});
        --left_;
        return;
    }
    if (zero_follows_) append(std::byte{0});
    left_ = static_cast<std::uint8_t>(byte - 1);
    zero_follows_ = byte != 0xFF;
}

std::optional<FrameDecoder::Frame> FrameDecoder::finish() {
    const bool was_empty = empty_;
    const bool is_whole = left_ == 0 && !too_long_ && size_ >= content_overhead_bytes;
    const std::size_t size = size_;
    start_over();
    if (was_empty) return std::nullopt;
    if (is_whole) {
        const std::span<const std::byte> content(content_.data(), size);
        const std::span<const std::byte> checked = content.first(size - crc_bytes);
        const std::array<std::byte, crc_bytes> crc = little_endian(crc32(checked));
        if (std::equal(crc.begin(), crc.end(), content.last(crc_bytes).begin())) {
            ++frames_good_;
            return Frame{std::to_integer<std::uint8_t>(content[0]), checked.subspan(1)};
        }
    }
    ++frames_bad_;
    return std::nullopt;
}

std::optional<FrameDecoder::Frame> FrameDecoder::next(std::span<const std::byte>& bytes) {
    while (!bytes.empty()) {
        const std::uint8_t byte = std::to_integer<std::uint8_t>(bytes.front());
        bytes = bytes.subspan(1);
        if (byte != 0) {
            take(byte);
        } else if (const std::optional<Frame> frame = finish()) {
            return frame;
        }
    }
    return std::nullopt;
}

}  // namespace halflsb
