// Every sample format, layout and number of channels that a filter can have, with a filter that remembers what it saw.
#include <algorithm>
#include <catch2/catch.hpp>
#include <cstring>
#include <map>

#include "rigs/kit/layout.h"
#include "tests/kit/bench.hpp"

using namespace kit_bench;

namespace {

// docs/wire.md, 2.1: bytes of a word by number (bits 0-4) and justification (bits 5-6: 0 right, 1 left, 2 packed).
const std::map<unsigned, unsigned> word_sizes = {
    {1, 2}, {2, 4}, {3, 2},  {4, 4},  {5, 4},          {6, 1},           {7, 1},
    {8, 4}, {9, 1}, {10, 2}, {11, 2}, {8 | 1 << 5, 4}, {10 | 1 << 5, 2}, {8 | 2 << 5, 3},
};
unsigned word_size(unsigned format) {
    const auto found = word_sizes.find(format & 0x7Fu);
    return found == word_sizes.end() ? 0 : found->second;
}

halflsb_filter any[2];
Bytes seen;
unsigned calls = 0;

/// Each output word is made of the bytes of the next channel's input word, changed by the channel's number. Works in
/// place as the kit's header asks: an instant is read before its answer is written.
template <int number>
void process(const void* in, void* out, std::uint16_t count) {
    const halflsb_filter& filter = any[number];
    const unsigned in_word = word_size(filter.input), out_word = word_size(filter.output);
    const auto* from = static_cast<const std::uint8_t*>(in);
    auto* to = static_cast<std::uint8_t*>(out);
    if (in_word != 3) CHECK(reinterpret_cast<std::uintptr_t>(in) % in_word == 0);
    if (out_word != 3) CHECK(reinterpret_cast<std::uintptr_t>(out) % out_word == 0);
    ++calls;
    for (unsigned n = 0; n < count; ++n) {
        const Bytes instant(from, from + in_word * filter.channels_in);
        seen.insert(seen.end(), instant.begin(), instant.end());
        from += instant.size();
        for (unsigned c = 0; c < filter.channels_out; ++c) {
            for (unsigned j = 0; j < out_word; ++j) {
                const unsigned source = (c + 1) % filter.channels_in;
                *to++ = static_cast<std::uint8_t>(instant[source * in_word + j % in_word] ^ (0x11u * (c + 1) + j));
            }
        }
    }
}
void reset() {}

/// The order in which a filter finds wire bytes, and the way back.
Bytes in_memory(Bytes wire, unsigned format) {
    const unsigned word = word_size(format);
    const bool turned = is_swapped && (format & 0x80u) == 0 && (word == 2 || word == 4);
    for (std::size_t at = 0; turned && at < wire.size(); at += word) {
        std::reverse(wire.begin() + static_cast<std::ptrdiff_t>(at),
                     wire.begin() + static_cast<std::ptrdiff_t>(at + word));
    }
    return wire;
}

/// What `process` answers, on the wire.
Bytes expected(const Bytes& wire) {
    const unsigned in_word = word_size(any[0].input), out_word = word_size(any[0].output);
    const Bytes memory = in_memory(wire, any[0].input);
    const unsigned instant = in_word * any[0].channels_in;
    Bytes out;
    for (std::size_t at = 0; at < memory.size(); at += instant) {
        for (unsigned c = 0; c < any[0].channels_out; ++c) {
            for (unsigned j = 0; j < out_word; ++j) {
                const unsigned source = (c + 1) % any[0].channels_in;
                out.push_back(
                    static_cast<std::uint8_t>(memory[at + source * in_word + j % in_word] ^ (0x11u * (c + 1) + j)));
            }
        }
    }
    return in_memory(std::move(out), any[0].output);
}

void power_up_with(unsigned input, unsigned output, unsigned channels_in = 1, unsigned channels_out = 1) {
    power_up();
    any[0] = {"any",
              HALFLSB_CALL,
              static_cast<std::uint8_t>(input),
              static_cast<std::uint8_t>(output),
              static_cast<std::uint8_t>(channels_in),
              static_cast<std::uint8_t>(channels_out),
              0,
              reset,
              process<0>,
              nullptr KIT_STEADY};
    any[1] = any[0];
    any[1].process = process<1>;
    board().filters = any;
    board().filter_count = 2;
    seen.clear();
    calls = 0;
    start_again();
}

/// Bytes of every value, none like its neighbours.
Bytes bytes_of(std::size_t count, unsigned first = 1) {
    Bytes bytes(count);
    for (std::size_t i = 0; i < count; ++i) bytes[i] = static_cast<std::uint8_t>(first + 37 * i);
    return bytes;
}

Bytes block(unsigned seq, const Bytes& samples) { return u8(0x10) + u16(seq) + samples; }
Bytes samples_of(const Bytes& response) { return Bytes(response.begin() + 10, response.end()); }

}  // namespace

TEST_CASE("formats: each of the 256 format bytes has its word size or is refused, in and out", "[kit]") {
    unsigned taken = 0;
    for (unsigned format = 0; format < 256; ++format) {
        const unsigned size = word_size(format);
        INFO("format byte " << format << ", " << size << " bytes");
        for (const bool is_output : {false, true}) {
            power_up_with(is_output ? 6 : format, is_output ? format : 6);
            if (size == 0 || size > HALFLSB_BLOCK_BYTES) {
                CHECK(ask(start_content(1, 0, 1)) == std::vector<Bytes>{refused(0x02, 1, 6)});
                continue;
            }
            ++taken;
            const unsigned in_bytes = is_output ? 1 : size;
            start(0, 1);
            CHECK(samples_of(ask_one(block(0, bytes_of(in_bytes)), 0x90)) == expected(bytes_of(in_bytes)));
            CHECK(ask(block(1, bytes_of(in_bytes - 1))) == std::vector<Bytes>{refused(0x10, 1, 5)});
            CHECK(ask(block(2, bytes_of(in_bytes + 1))) == std::vector<Bytes>{refused(0x10, 2, 5)});
            CHECK(calls == 1);
        }
    }
    // 14 numbers and layouts in two byte orders, in and out; fewer where the board has no room for a word of 4 bytes.
    if (HALFLSB_BLOCK_BYTES >= 4) CHECK(taken == 56);
}

TEST_CASE("formats: words lie in memory as the header says, byte order and packing kept", "[kit]") {
    for (const auto& [layout, size] : word_sizes) {
        for (const unsigned format : {layout, layout | 0x80u}) {
            INFO("format byte " << format);
            power_up_with(format, format);
            const unsigned most = std::min<unsigned>(HALFLSB_BLOCK_SAMPLES, HALFLSB_BLOCK_BYTES / size);
            if (most == 0) continue;
            CHECK(start(0, HALFLSB_BLOCK_SAMPLES).block == most);
            const Bytes wire = bytes_of(std::size_t{most} * size);
            CHECK(samples_of(ask_one(block(0, wire), 0x90)) == expected(wire));
            CHECK(seen == in_memory(wire, format));
        }
    }
    if (HALFLSB_BLOCK_BYTES < 4) return;
    // By hand: 0x0102 as u12 left-justified, once in each order; the machine of the swapped build is big-endian.
    power_up_with(10 | 1 << 5, 10 | 1 << 5);
    start(0, 1);
    ask_one(block(0, {0x20, 0x10}), 0x90);
    CHECK(seen == (is_swapped ? Bytes{0x10, 0x20} : Bytes{0x20, 0x10}));
    power_up_with(10 | 1 << 5 | 0x80, 10);
    start(0, 1);
    ask_one(block(0, {0x10, 0x20}), 0x90);
    CHECK(seen == Bytes{0x10, 0x20});
}

TEST_CASE("channels: 1 to 4 in and out, words of every size, blocks at their limits, asked for again", "[kit]") {
    const unsigned q7 = 6, u12 = 10, packed = 8 | 2 << 5, i24 = 8, q15_big = 1 | 0x80;
    std::size_t streamed = 0;
    for (const unsigned input : {q7, u12, packed, i24, q15_big}) {
        for (const unsigned output : {q7, u12, packed, i24, q15_big}) {
            for (unsigned channels_in = 1; channels_in <= 4; ++channels_in) {
                for (unsigned channels_out = 1; channels_out <= 4; ++channels_out) {
                    INFO("formats " << input << ", " << output << ", channels " << channels_in << ", " << channels_out);
                    power_up_with(input, output, channels_in, channels_out);
                    const unsigned in = word_size(input) * channels_in, out = word_size(output) * channels_out;
                    const unsigned most =
                        std::min<unsigned>(HALFLSB_BLOCK_SAMPLES, HALFLSB_BLOCK_BYTES / std::max(in, out));
                    if (most == 0) {
                        CHECK(ask(start_content(1, 0, 1)) == std::vector<Bytes>{refused(0x02, 1, 6)});
                        continue;
                    }
                    CHECK(start(0, HALFLSB_BLOCK_SAMPLES).block == most);
                    unsigned seq = 0;
                    for (const unsigned count : {most, 1u, std::max(1u, most - 1), most}) {
                        const Bytes wire = bytes_of(std::size_t{count} * in, count + seq);
                        const Bytes response = ask_one(block(seq, wire), 0x90);
                        CHECK(response.size() == 10 + std::size_t{count} * out);
                        CHECK(samples_of(response) == expected(wire));
                        const unsigned before = calls;
                        CHECK(ask_one(block(seq, wire), 0x90) == response);  // kept, not computed again
                        CHECK(calls == before);
                        ++seq;
                    }
                    CHECK(ask(block(seq, bytes_of((most + 1u) * in))) == std::vector<Bytes>{refused(0x10, seq, 5)});
                    ++seq;
                    if (in > 1) {
                        CHECK(ask(block(seq, bytes_of(in * most - 1u))) == std::vector<Bytes>{refused(0x10, seq, 5)});
                    }
                    CHECK(calls == 4);
                    ++streamed;
                }
            }
        }
    }
    CHECK(streamed > 0);
    if (HALFLSB_BLOCK_BYTES >= 16) CHECK(streamed == 400);
}

TEST_CASE("channels: a window full of the longest frames fits, and all its answers are kept", "[kit]") {
    for (const unsigned format : {6u, 8u | 2u << 5, 8u}) {
        for (unsigned channels = 1; channels <= 4; ++channels) {
            const unsigned instant = word_size(format) * channels;
            if (instant > HALFLSB_BLOCK_BYTES) continue;
            power_up_with(format, format, channels, channels);
            const Started started = start(0, HALFLSB_BLOCK_SAMPLES);
            INFO("format " << format << ", " << channels << " channels, block " << started.block << ", credit "
                           << started.credit);
            CHECK(started.credit >= 1);
            Bytes window;
            const Bytes samples(std::size_t{started.block} * instant, 0x55);  // no zero byte
            for (unsigned seq = 0; seq < started.credit; ++seq) {
                window = std::move(window) + u8(0) + frame_of(block(seq, samples));
            }
            put(window + u8(0) + frame_of(u8(0x03) + u32(0x01020304)));
            std::vector<Bytes> answers = take();
            REQUIRE(answers.size() == started.credit + 1);
            CHECK(get32(answers.back(), 9) == 0);  // bytes_lost
            answers.pop_back();
            put(window);
            CHECK(take() == answers);
            CHECK(calls == started.credit);
            // The next block goes on after them.
            CHECK(samples_of(ask_one(block(started.credit, samples), 0x90)) == expected(samples));
        }
    }
}

TEST_CASE("select: a filter of other channels or another layout is refused", "[kit]") {
    const auto select = u8(0x14) + u16(0) + u64(0) + u8(1);
    const auto with_other = [&](auto change) {
        power_up_with(6, 6);
        change(any[1]);
        start(0, 1);
        return ask(select);
    };
    const std::vector<Bytes> no = {refused(0x14, 0, 5)};
    CHECK(with_other([](halflsb_filter&) {}) == std::vector<Bytes>{u8(0x91) + u16(0) + u64(0)});
    CHECK(with_other([](halflsb_filter& f) { f.channels_in = 2; }) == no);
    CHECK(with_other([](halflsb_filter& f) { f.channels_out = 2; }) == no);
    CHECK(with_other([](halflsb_filter& f) { f.input = 6 | 0x80; }) == no);
    CHECK(with_other([](halflsb_filter& f) { f.output = 7; }) == no);
}

TEST_CASE("greeting: a filter's page has its format bytes and channels as they are", "[kit]") {
    power_up_with(HALFLSB_I24 | HALFLSB_PACKED | HALFLSB_BIG, HALFLSB_U12 | HALFLSB_LEFT, 2, 3);
    const Bytes page = ask_one(u8(0x01) + u32(5) + u8(1), 0x81);
    CHECK(Bytes(page.end() - 7, page.end()) == Bytes{0, 0xC8, 0x2A, 2, 3, 0, 0});
}
