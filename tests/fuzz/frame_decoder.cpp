// decode(encode(x)) = x, whatever came before; and whatever comes, the same frames however it is cut.
#include <algorithm>
#include <optional>
#include <vector>

#include "runner/wire/frame.hpp"
#include "tests/fuzz/target.hpp"

using namespace halflsb;

namespace {

using Bytes = std::vector<std::byte>;

struct Decoded {
    std::vector<std::uint8_t> types;
    std::vector<Bytes> bodies;
    std::int64_t good = 0, bad = 0;
    bool operator==(const Decoded&) const = default;
};

/// Pieces of 1, 2, ... up to `largest_piece` bytes; 0: all at once.
Decoded decode(std::span<const std::byte> line, std::size_t max_content_bytes, std::size_t largest_piece) {
    FrameDecoder decoder(max_content_bytes);
    Decoded decoded;
    std::size_t piece = 0;
    while (!line.empty()) {
        piece = largest_piece == 0 ? line.size() : piece % largest_piece + 1;
        std::span<const std::byte> part = line.first(std::min(piece, line.size()));
        line = line.subspan(part.size());
        while (const std::optional<FrameDecoder::Frame> frame = decoder.next(part)) {
            fuzz::require(frame->body.size() + content_overhead_bytes <= max_content_bytes,
                          "no frame is longer than the decoder was made for");
            decoded.types.push_back(frame->type);
            decoded.bodies.emplace_back(frame->body.begin(), frame->body.end());
        }
        fuzz::require(part.empty(), "bytes are used up when there is no frame");
    }
    decoded.good = decoder.frames_good();
    decoded.bad = decoder.frames_bad();
    return decoded;
}

void check_arbitrary_bytes(std::span<const std::byte> line, std::size_t max_content_bytes, std::size_t piece) {
    const Decoded whole = decode(line, max_content_bytes, 0);
    fuzz::require(whole == decode(line, max_content_bytes, 1), "single bytes give the same frames");
    fuzz::require(whole == decode(line, max_content_bytes, piece), "pieces give the same frames");
    fuzz::require(whole.good == static_cast<std::int64_t>(whole.bodies.size()), "good frames are counted");
    const auto delimiters = std::count(line.begin(), line.end(), std::byte{0});
    fuzz::require(whole.good + whole.bad <= delimiters, "no frame without its delimiter");
}

/// What is taken for a frame is the encoding of what it is taken for; a final full group may have a 0x01
/// behind it (docs/wire.md, 1).
void check_accepted_frames(std::span<const std::byte> line) {
    constexpr std::size_t full_group_bytes = 255;
    for (auto end = std::find(line.begin(), line.end(), std::byte{0}); end != line.end();
         end = std::find(line.begin(), line.end(), std::byte{0})) {
        const std::span<const std::byte> frame = line.first(static_cast<std::size_t>(end - line.begin()) + 1);
        line = line.subspan(frame.size());
        const Decoded alone = decode(frame, frame.size(), 0);
        if (alone.good == 0) continue;
        Bytes again;
        append_frame(again, alone.types[0], alone.bodies[0]);
        if (again.size() + 1 == frame.size() && again.size() > full_group_bytes)
            again.insert(again.end() - 1, std::byte{1});
        fuzz::require(std::equal(again.begin(), again.end(), frame.begin(), frame.end()),
                      "encode(decode(frame)) = frame");
    }
}

void check_round_trip(std::span<const std::byte> garbage, std::uint8_t type, std::span<const std::byte> body) {
    Bytes frame;
    append_frame(frame, type, body);
    fuzz::require(frame.size() <= largest_frame_bytes(body.size()), "a frame is no longer than promised");
    fuzz::require(std::find(frame.begin(), frame.end(), std::byte{0}) == frame.end() - 1,
                  "the only zero of a frame is its delimiter");
    const std::size_t content = body.size() + content_overhead_bytes;
    const Decoded alone = decode(frame, content, 0);
    fuzz::require(alone.good == 1 && alone.bad == 0 && alone.types[0] == type &&
                      std::equal(body.begin(), body.end(), alone.bodies[0].begin(), alone.bodies[0].end()),
                  "decode(encode(x)) = x");
    const Decoded too_long = decode(frame, content - 1, 0);
    fuzz::require(too_long.good == 0 && too_long.bad == 1, "one byte less of room makes it a bad frame");

    Bytes line(garbage.begin(), garbage.end());
    line.push_back(std::byte{0});
    line.insert(line.end(), frame.begin(), frame.end());
    const Decoded after = decode(line, content, 3);
    fuzz::require(after.good >= 1 && after.types.back() == type && after.bodies.back() == alone.bodies[0],
                  "a delimiter ends whatever garbage came before a frame");
}

}  // namespace

/// Three bytes that choose, then the line; the same bytes are a body too.
extern "C" int LLVMFuzzerTestOneInput(const std::uint8_t* data, std::size_t size) {
    if (size < 3) return 0;
    const std::size_t max_content_bytes = std::size_t{data[0]} * 5, piece = std::size_t{data[1]} + 1;
    const std::span<const std::byte> rest = fuzz::bytes_of(data + 3, size - 3);
    check_arbitrary_bytes(rest, max_content_bytes, piece);
    check_accepted_frames(rest);
    const std::size_t cut = std::min(piece - 1, rest.size());
    check_round_trip(rest.first(cut), data[2], rest.subspan(cut));
    return 0;
}
