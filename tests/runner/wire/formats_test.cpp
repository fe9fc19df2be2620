// Words of every format and layout on the line, against the model board, which reads them by docs/wire.md alone.
#include <algorithm>
#include <catch2/catch.hpp>

#include "tests/runner/wire/bench.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

std::vector<std::uint8_t> bytes_of(const std::vector<int>& numbers) {
    return std::vector<std::uint8_t>(numbers.begin(), numbers.end());
}

/// The words of the one SAMPLES frame that the board got; the frame itself is answered as usual.
void remember_words(ModelBoard& board, std::vector<std::uint8_t>& words) {
    board.instead = [&words](std::uint8_t type, const Bytes& body, Bytes&) {
        if (type == 0x10) {
            words.clear();
            for (std::size_t k = 2; k < body.size(); ++k) words.push_back(std::to_integer<std::uint8_t>(body[k]));
        }
        return false;
    };
}

std::vector<Code> passed_through(Bench& bench, const std::vector<Code>& codes) {
    Wire& wire = bench.session();
    wire.send(codes);
    const Outcome<Received> received = wire.advance(bench.clock.now() + seconds(1.0));
    REQUIRE(received);
    return received->samples;
}

/// Ends, middle and neighbours of a format's codes.
std::vector<Code> telling_codes(const ModelWords& words) {
    const std::int64_t span = std::int64_t{1} << words.bits();
    const std::int64_t lowest = words.zero() > 0 ? 0 : -span / 2;
    std::vector<Code> codes;
    for (const std::int64_t code : {lowest, lowest + 1, words.zero() - 1, words.zero(), words.zero() + 1,
                                    lowest + span / 3, lowest + span - 2, lowest + span - 1})
        codes.push_back(static_cast<Code>(code));
    return codes;
}

}  // namespace

TEST_CASE("formats: the words of docs/wire.md, byte for byte", "[wire]") {
    struct Example {
        int format;
        std::vector<Code> codes;
        std::vector<int> words;
    };
    // Bits 0-4 the number, 5-6 the justification, 7 the byte order.
    const std::vector<Example> examples = {
        {1, {0x1234, -2}, {0x34, 0x12, 0xFE, 0xFF}},
        {1 | 0x80, {0x1234, -2}, {0x12, 0x34, 0xFF, 0xFE}},
        {2 | 0x80, {0x12345678}, {0x12, 0x34, 0x56, 0x78}},
        {5 | 0x80, {0x3F800000}, {0x3F, 0x80, 0x00, 0x00}},
        {6, {127, -128}, {0x7F, 0x80}},
        {7, {-1}, {0xFF}},
        {8, {0x123456, -2}, {0x56, 0x34, 0x12, 0x00, 0xFE, 0xFF, 0xFF, 0xFF}},
        {8 | 0x80, {-2}, {0xFF, 0xFF, 0xFF, 0xFE}},
        {8 | 0x20, {0x123456, -2}, {0x00, 0x56, 0x34, 0x12, 0x00, 0xFE, 0xFF, 0xFF}},
        {8 | 0x20 | 0x80, {0x123456}, {0x12, 0x34, 0x56, 0x00}},
        {8 | 0x40, {0x123456, -2}, {0x56, 0x34, 0x12, 0xFE, 0xFF, 0xFF}},
        {8 | 0x40 | 0x80, {0x123456}, {0x12, 0x34, 0x56}},
        {9, {0, 128, 255}, {0x00, 0x80, 0xFF}},
        {10, {0x123, 0xFFF}, {0x23, 0x01, 0xFF, 0x0F}},
        {10 | 0x80, {0x123}, {0x01, 0x23}},
        {10 | 0x20, {0x123, 0xFFF}, {0x30, 0x12, 0xF0, 0xFF}},
        {10 | 0x20 | 0x80, {0x123}, {0x12, 0x30}},
        {11, {0x1234}, {0x34, 0x12}},
        {11 | 0x80, {0xFFFE}, {0xFF, 0xFE}},
    };
    for (const Example& example : examples) {
        CAPTURE(example.format);
        Bench bench;
        bench.board.filters[0].input = bench.board.filters[0].output = example.format;
        std::vector<std::uint8_t> words;
        remember_words(bench.board, words);
        REQUIRE(bench.open(0));
        CHECK(passed_through(bench, example.codes) == example.codes);
        CHECK(words == bytes_of(example.words));
    }
}

TEST_CASE("formats: every format and layout there and back, one channel and three", "[wire]") {
    int tried = 0;
    for (int format = 1; format < 256; ++format) {
        const std::optional<SampleFormat> known = sample_format_of_wire_code(static_cast<std::uint8_t>(format));
        if (!known) continue;
        ++tried;
        CAPTURE(format, text_of(*known));
        const ModelWords words(format);
        CHECK(known->word_bytes() == words.bytes());
        for (const int channels : {1, 3}) {
            CAPTURE(channels);
            Bench bench;
            ModelBoard::Filter& filter = bench.board.filters[0];
            filter.input = filter.output = format;
            filter.channels_in = filter.channels_out = channels;
            REQUIRE(bench.open(0));
            std::vector<Code> codes;
            for (const Code code : telling_codes(words))
                for (int c = 0; c < channels; ++c) codes.push_back(c == 1 ? static_cast<Code>(words.zero()) : code);
            CHECK(passed_through(bench, codes) == codes);
            const auto count = static_cast<std::int64_t>(codes.size()) / channels;
            CHECK(bench.session().figures().bytes_sent == bench.session().bytes_to_board(count));
            CHECK(bench.board.processed_samples == count);
        }
    }
    // 11 formats in both byte orders but for the three of one byte, 2 left-justified ones and a packed one in both.
    CHECK(tried >= 11 + 8 + 6);
}

TEST_CASE("formats: two channels of u12 in, of packed big-endian i24 out", "[wire]") {
    Bench bench;
    bench.limits.block_samples = 5;
    bench.board.filters = {{"pair", ModelBoard::Work::average, 0, 10, 8 | 0x40 | 0x80, 2, 2}};
    bench.board.settings = {{"average-points", 1, 64, 2}};
    std::vector<std::uint8_t> words;
    remember_words(bench.board, words);
    REQUIRE(bench.open(0));
    CHECK(bench.session().room_samples() == 5);
    // Values of channel 1: 0, 100, -2048; of channel 2: 1, 0, 2047.
    CHECK(passed_through(bench, {2048, 2049, 2148, 2048, 0, 4095}) == std::vector<Code>{0, 1, 50, 1, -974, 1024});
    CHECK(words == bytes_of({0x00, 0x08, 0x01, 0x08, 0x64, 0x08, 0x00, 0x08, 0x00, 0x00, 0xFF, 0x0F}));
}

TEST_CASE("formats: with many channels the host asks for smaller blocks", "[wire]") {
    Bench bench;
    bench.limits.block_samples = 65535;
    bench.board.max_block_samples = 65535;
    bench.board.filters[0].input = 3;
    bench.board.filters[0].output = 4;
    SECTION("one channel: the largest block there is") {
        REQUIRE(bench.open(0));
        CHECK(bench.session().room_samples() == 65535);
    }
    SECTION("both sides count: 3 channels of 4 bytes") {
        bench.board.filters[0].channels_out = 3;
        REQUIRE(bench.open(0));
        CHECK(bench.session().room_samples() == 21845);
    }
    SECTION("255 channels in") {
        bench.board.filters[0].channels_in = 255;
        REQUIRE(bench.open(0));
        CHECK(bench.session().room_samples() == 514);
    }
    SECTION("the board grants less") {
        bench.board.filters[0].channels_in = bench.board.filters[0].channels_out = 4;
        bench.board.block_said_at_start = 16;
        REQUIRE(bench.open(0));
        CHECK(bench.session().room_samples() == 16);
    }
}
