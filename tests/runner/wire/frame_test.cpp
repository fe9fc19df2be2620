// The frame codec against published vectors, its own inverse, and every single-bit error.
#include "runner/wire/frame.hpp"

#include <algorithm>
#include <catch2/catch.hpp>
#include <fstream>
#include <random>
#include <sstream>
#include <string>

#include "tests/support/model_board.hpp"
#include "tests/support/source_dir.hpp"

using namespace halflsb;
using Bytes = std::vector<std::byte>;

namespace {

Bytes from_hex(const std::string& text) {
    Bytes bytes;
    std::istringstream words(text);
    for (std::string word; words >> word;) bytes.push_back(static_cast<std::byte>(std::stoi(word, nullptr, 16)));
    return bytes;
}

Bytes from_text(const std::string& text) {
    const auto bytes = std::as_bytes(std::span(text.data(), text.size()));
    return Bytes(bytes.begin(), bytes.end());
}

Bytes cobs(const Bytes& content) {
    Bytes out;
    append_cobs(out, content);
    return out;
}

struct Decoded {
    std::vector<Bytes> frames;  ///< type and body joined
    std::int64_t bad = 0;
};

/// `step` bytes at a time.
Decoded decode(const Bytes& bytes, std::size_t step = SIZE_MAX, std::size_t most = 4096) {
    FrameDecoder decoder(most);
    Decoded decoded;
    for (std::size_t at = 0; at < bytes.size(); at += std::min(step, bytes.size() - at)) {
        std::span<const std::byte> part = std::span(bytes).subspan(at, std::min(step, bytes.size() - at));
        while (const auto frame = decoder.next(part)) {
            Bytes content{std::byte{frame->type}};
            content.insert(content.end(), frame->body.begin(), frame->body.end());
            decoded.frames.push_back(content);
        }
        CHECK(part.empty());
    }
    decoded.bad = decoder.frames_bad();
    return decoded;
}

Bytes frame_of(const Bytes& content) {
    Bytes out;
    append_frame(out, std::to_integer<std::uint8_t>(content.at(0)), std::span(content).subspan(1));
    return out;
}

/// With a CRC, but encoded by the given bytes.
Bytes with_crc(Bytes content) {
    const std::uint32_t crc = crc32(content);
    for (int k = 0; k < 4; ++k) content.push_back(static_cast<std::byte>((crc >> (8 * k)) & 0xFF));
    return content;
}

Bytes random_content(std::mt19937_64& random, std::size_t size) {
    Bytes content(size);
    // Some with many zeros, some with none, some of anything.
    const auto kind = random() % 3;
    for (std::byte& byte : content) {
        const auto value = random();
        byte = static_cast<std::byte>(kind == 0   ? (value % 4 == 0 ? value >> 8 : 0) & 0xFF
                                      : kind == 1 ? 1 + (value >> 8) % 255
                                                  : (value >> 8) & 0xFF);
    }
    return content;
}

}  // namespace

TEST_CASE("crc: the values of the published table", "[wire]") {
    // CRC-32/ISO-HDLC, check value SEEN (Cook's catalogue); the others COMPUTED. Columns of crc-check-values.csv.
    std::ifstream file(test::source_path("tests/published/crc-check-values.csv"));
    std::string line;
    while (std::getline(file, line) && line.rfind("CRC-32/ISO-HDLC,", 0) != 0) {
    }
    std::vector<std::string> fields;
    std::istringstream cells(line);
    for (std::string cell; std::getline(cells, cell, ',');) fields.push_back(cell);
    REQUIRE(fields.size() == 17);
    const auto value = [&](std::size_t column) {
        return static_cast<std::uint32_t>(std::stoul(fields[column], nullptr, 16));
    };
    CHECK(value(7) == 0xCBF43926U);
    CHECK(crc32(from_text("123456789")) == value(7));
    CHECK(crc32({}) == value(9));
    CHECK(crc32(Bytes(1, std::byte{0x00})) == value(10));
    CHECK(crc32(Bytes(1, std::byte{0xFF})) == value(11));
    CHECK(crc32(Bytes(4, std::byte{0x00})) == value(12));
    CHECK(crc32(Bytes(4, std::byte{0xFF})) == value(13));
    CHECK(crc32(from_text("123456789")) == value(14));
    CHECK(crc32(from_text("A")) == value(15));
    Bytes all;
    for (int k = 0; k < 256; ++k) all.push_back(static_cast<std::byte>(k));
    CHECK(crc32(all) == value(16));
}

TEST_CASE("cobs: the published vectors, both ways", "[wire]") {
    // cobs-vectors.csv: S = SEEN in a library's test suite, W = SEEN-2 as an encyclopaedia's table, C = COMPUTED.
    std::ifstream file(test::source_path("tests/published/cobs-vectors.csv"));
    std::string line;
    REQUIRE(std::getline(file, line));
    int vectors = 0;
    while (std::getline(file, line)) {
        std::vector<std::string> fields;
        std::istringstream cells(line);
        for (std::string cell; std::getline(cells, cell, ',');) fields.push_back(cell);
        REQUIRE(fields.size() == 6);
        INFO(fields[0] << " (" << fields[5] << ")");
        const Bytes input = from_hex(fields[3]);
        CHECK(input.size() == std::stoul(fields[1]));
        CHECK(cobs(input) == from_hex(fields[4]));
        ++vectors;
    }
    CHECK(vectors == 22);
}

TEST_CASE("cobs: key vectors of the table", "[wire]") {
    CHECK(cobs({}) == from_hex("01"));                                   // SEEN
    CHECK(cobs(from_hex("00")) == from_hex("01 01"));                    // SEEN-2
    CHECK(cobs(from_hex("11 22 00 33")) == from_hex("03 11 22 02 33"));  // SEEN-2
    CHECK(cobs(from_hex("11 00 00 00")) == from_hex("02 11 01 01 01"));  // SEEN-2
}

TEST_CASE("frame: decoding inverts encoding for any content and any cut into pieces", "[wire]") {
    const std::uint64_t seed = 20261201;
    INFO("seed " << seed);
    std::mt19937_64 random(seed);
    for (int round = 0; round < 400; ++round) {
        const Bytes content = random_content(random, 1 + random() % 1200);
        const Bytes frame = frame_of(content);
        CAPTURE(round, content.size());
        CHECK(frame.size() <= largest_frame_bytes(content.size() - 1));
        CHECK(std::count(frame.begin(), frame.end(), std::byte{0}) == 1);
        const std::size_t step = 1 + random() % 40;
        const Decoded decoded = decode(frame, step);
        REQUIRE(decoded.frames.size() == 1);
        CHECK(decoded.frames[0] == content);
        CHECK(decoded.bad == 0);
    }
}

TEST_CASE("frame: our encoder and the model board's independent one are understood alike", "[wire]") {
    std::mt19937_64 random(7);
    for (std::size_t size = 1; size < 800; ++size) {
        const Bytes content = random_content(random, size);
        std::vector<std::uint8_t> body;
        for (std::size_t k = 1; k < content.size(); ++k) body.push_back(std::to_integer<std::uint8_t>(content[k]));
        const Bytes theirs = test::ModelBoard::frame(std::to_integer<std::uint8_t>(content[0]), body);
        const Decoded decoded = decode(theirs);
        CAPTURE(size);
        REQUIRE(decoded.frames.size() == 1);
        CHECK(decoded.frames[0] == content);
    }
}

TEST_CASE("frame: both endings of a final full group are taken", "[wire]") {
    // 250 bytes and the CRC make a full group of 254, if none is zero.
    Bytes content(250, std::byte{0x55});
    Bytes checked = with_crc(content);
    for (int k = 1; std::count(checked.begin(), checked.end(), std::byte{0}) > 0; ++k) {
        content[1] = static_cast<std::byte>(k);
        checked = with_crc(content);
    }
    Bytes minimal = cobs(checked);
    REQUIRE(minimal.size() == 255);
    REQUIRE(minimal[0] == std::byte{0xFF});
    Bytes padded = minimal;
    padded.push_back(std::byte{0x01});
    for (Bytes bytes : {minimal, padded}) {
        bytes.push_back(std::byte{0});
        const Decoded decoded = decode(bytes);
        REQUIRE(decoded.frames.size() == 1);
        CHECK(decoded.frames[0] == content);
    }
}

TEST_CASE("frame: every single-bit error is noticed, and the frame behind it survives", "[wire]") {
    std::mt19937_64 random(11);
    for (const std::size_t size : {1U, 5U, 40U, 300U}) {
        const Bytes content = random_content(random, size), next = from_hex("92 34 12");
        const Bytes frame = frame_of(content), behind = frame_of(next);
        for (std::size_t bit = 0; bit < 8 * frame.size(); ++bit) {
            Bytes bytes = frame;
            bytes[bit / 8] ^= std::byte{1} << (bit % 8);
            bytes.push_back(std::byte{0});  // as a sender that starts a frame with an empty one
            bytes.insert(bytes.end(), behind.begin(), behind.end());
            const Decoded decoded = decode(bytes);
            INFO("size " << size << " bit " << bit);
            REQUIRE(decoded.frames.size() == 1);
            REQUIRE(decoded.frames[0] == next);
            REQUIRE(decoded.bad >= 1);
        }
    }
}

TEST_CASE("frame: what is no frame is dropped and counted", "[wire]") {
    // Must be rejected: SEEN (05 31 32 33; 05 31 32 33 34 00 in the middle; the length says more than there is).
    const char* broken[] = {"05 31 32 33 00", "FF 01 02 00", "01 00", "02 31 00", "05 11 22 33 44 00"};
    for (const char* hex : broken) {
        INFO(hex);
        const Decoded decoded = decode(from_hex(hex));
        CHECK(decoded.frames.empty());
        CHECK(decoded.bad == 1);
    }
    SECTION("empty frames are not even counted") {
        const Decoded decoded = decode(from_hex("00 00 00 00"));
        CHECK(decoded.frames.empty());
        CHECK(decoded.bad == 0);
    }
    SECTION("content of exactly the largest size is taken, one more is not") {
        Bytes content(95, std::byte{0x41});
        CHECK(decode(frame_of(content), SIZE_MAX, 99).frames.size() == 1);
        content.push_back(std::byte{0x42});
        const Decoded decoded = decode(frame_of(content), SIZE_MAX, 99);
        CHECK(decoded.frames.empty());
        CHECK(decoded.bad == 1);
    }
}

TEST_CASE("frame: a decoder fed with noise stays within bounds and finds the frame behind it", "[wire]") {
    const std::uint64_t seed = 4711;
    INFO("seed " << seed);
    std::mt19937_64 random(seed);
    const Bytes content = from_hex("90 01 00 10 00 00 00 02 00 00 AA BB");
    for (int round = 0; round < 200; ++round) {
        Bytes bytes(random() % 2000);
        for (std::byte& byte : bytes) byte = static_cast<std::byte>(random() & 0xFF);
        bytes.push_back(std::byte{0});
        const Bytes frame = frame_of(content);
        bytes.insert(bytes.end(), frame.begin(), frame.end());
        const Decoded decoded = decode(bytes, 1 + random() % 100, 128);
        REQUIRE(decoded.frames.size() == 1);
        CHECK(decoded.frames[0] == content);
    }
}
