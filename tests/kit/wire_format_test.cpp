// The kit's CRC-32 and COBS against published values: tests/published/, the provenance of each row in its last column
// (S, W, C) or in the column's name.
#include <catch2/catch.hpp>
#include <fstream>
#include <sstream>
#include <string>

#include "tests/kit/bench.hpp"
#include "tests/support/source_dir.hpp"

extern "C" {
#include "rigs/kit/cobs.h"
#include "rigs/kit/crc32.h"
}

using namespace kit_bench;

namespace {

std::vector<std::vector<std::string>> rows_of(const std::string& name) {
    std::ifstream file(halflsb::test::source_path("tests/published/" + name));
    REQUIRE(file);
    std::vector<std::vector<std::string>> rows;
    for (std::string line; std::getline(file, line);) {
        std::vector<std::string> fields(1);
        bool quoted = false;
        for (char c : line) {
            if (c == '"') {
                quoted = !quoted;
            } else if (c == ',' && !quoted) {
                fields.emplace_back();
            } else if (c != '\r') {
                fields.back() += c;
            }
        }
        rows.push_back(fields);
    }
    return rows;
}

Bytes bytes_of(const std::string& hex) {
    Bytes bytes;
    std::istringstream words(hex);
    for (std::string word; words >> word;) bytes.push_back(static_cast<std::uint8_t>(std::stoul(word, nullptr, 16)));
    return bytes;
}

Bytes encoded;
void keep(const std::uint8_t* bytes, std::size_t count) { encoded.insert(encoded.end(), bytes, bytes + count); }

Bytes encode(const Bytes& content) {
    encoded.clear();
    halflsb_cobs_encode(content.data(), content.size(), keep);
    return encoded;
}

std::optional<Bytes> decode(const Bytes& bytes) {
    halflsb_cobs_decoder decoder = {0, 0};
    Bytes content;
    for (std::uint8_t byte : bytes) {
        const int value = halflsb_cobs_decode(&decoder, byte);
        if (value >= 0) content.push_back(static_cast<std::uint8_t>(value));
    }
    if (decoder.left != 0) return std::nullopt;
    return content;
}

}  // namespace

TEST_CASE("cobs: every published vector encodes and decodes", "[kit]") {
    const auto rows = rows_of("cobs-vectors.csv");
    int checked = 0;
    for (std::size_t i = 1; i < rows.size(); ++i) {
        const Bytes content = bytes_of(rows[i][3]), wire = bytes_of(rows[i][4]);
        INFO("case " << rows[i][0] << ", source " << rows[i][5]);
        CHECK(encode(content) == wire);
        CHECK(decode(wire) == content);
        CHECK(cobs_of(content) == wire);  // this test's own codec as well
        ++checked;
    }
    CHECK(checked == 22);
}

TEST_CASE("cobs: a final full group is taken with and without a 0x01 behind it", "[kit]") {
    const Bytes content(254, 7);
    CHECK(encode(content) == u8(255) + content);
    CHECK(decode(u8(255) + content) == content);
    CHECK(decode(u8(255) + content + u8(1)) == content);
    CHECK(decode(u8(255) + content + u8(2) + u8(9)) == content + u8(9));
}

TEST_CASE("cobs: a group that is cut short is no frame", "[kit]") {
    CHECK(!decode({5, 1, 2, 3}));
    CHECK(!decode({2}));
    CHECK(decode({1}) == Bytes{});
}

TEST_CASE("cobs: each length to two full groups, with a zero at each end and without", "[kit]") {
    for (std::size_t length = 0; length < 520; ++length) {
        for (int zeros = 0; zeros < 4; ++zeros) {
            Bytes content(length, 0xA5);
            if (length > 0 && (zeros & 1) != 0) content.front() = 0;
            if (length > 0 && (zeros & 2) != 0) content.back() = 0;
            const Bytes wire = encode(content);
            INFO("length " << length << ", zeros " << zeros);
            CHECK(wire == cobs_of(content));
            CHECK(decode(wire) == content);
            CHECK(std::count(wire.begin(), wire.end(), 0) == 0);
            CHECK(wire.size() <= length + 1 + length / 254);  // docs/wire.md, 5
        }
    }
}

TEST_CASE("crc: the published values of CRC-32/ISO-HDLC", "[kit]") {
    const auto rows = rows_of("crc-check-values.csv");
    int checked = 0;
    for (const auto& row : rows) {
        if (row[0] != "CRC-32/ISO-HDLC") continue;
        Bytes all(256);
        for (std::size_t i = 0; i < 256; ++i) all[i] = static_cast<std::uint8_t>(i);
        const std::string digits = "123456789";
        // The catalogue's check value is SEEN, its residue MEMORY with COMPUTED agreement, the others COMPUTED.
        const std::vector<std::pair<Bytes, std::string>> values = {{Bytes(digits.begin(), digits.end()), row[7]},
                                                                   {{}, row[9]},
                                                                   {{0x00}, row[10]},
                                                                   {{0xFF}, row[11]},
                                                                   {Bytes(4, 0x00), row[12]},
                                                                   {Bytes(4, 0xFF), row[13]},
                                                                   {{'A'}, row[15]},
                                                                   {all, row[16]}};
        for (const auto& [bytes, value] : values) {
            CHECK(halflsb_crc_of(bytes.data(), bytes.size()) == std::stoul(value, nullptr, 16));
            CHECK(crc_of(bytes) == std::stoul(value, nullptr, 16));
            ++checked;
        }
        CHECK(HALFLSB_CRC_RESIDUE == std::stoul(row[8], nullptr, 16));
        std::uint32_t crc = HALFLSB_CRC_START;
        for (std::uint8_t byte : all + u32(crc_of(all))) crc = halflsb_crc_add(crc, byte);
        CHECK(crc == HALFLSB_CRC_RESIDUE);
    }
    CHECK(checked == 8);
}
