// A board made of the kit and filters that remember, and the line to it: bytes in, whole frames out.
#pragma once

#include <cstdint>
#include <deque>
#include <optional>
#include <string>
#include <vector>

#include "rigs/kit/halflsb_kit.h"

/// What a filter that keeps the rate has behind `load`.
#if HALFLSB_RATES
#define KIT_STEADY , 0, 0, nullptr
#else
#define KIT_STEADY
#endif

namespace kit_bench {

using Bytes = std::vector<std::uint8_t>;

/// A codec of this test's own, from docs/wire.md.
Bytes cobs_of(const Bytes& content);
std::optional<Bytes> content_of_cobs(const Bytes& encoded);
std::uint32_t crc_of(const Bytes& bytes);

/// Little-endian fields.
Bytes u8(unsigned value);
Bytes u16(unsigned value);
Bytes u32(std::uint32_t value);
Bytes u64(std::uint64_t value);
Bytes operator+(Bytes a, const Bytes& b);
std::uint32_t get16(const Bytes& bytes, std::size_t at);
std::uint32_t get32(const Bytes& bytes, std::size_t at);

/// The frame of a content, with CRC and delimiter.
Bytes frame_of(const Bytes& content);

// Its filters. "double" answers each q15 sample twice as large, modulo 2^16; "sum" the running sum of them, as i32
// (wider out than in); "narrow" the upper half of a q31 sample as q15; "two" has two channels in, both exchanged out;
// "table" multiplies by the word of a table of 4 that LOAD writes; "other double" is like "double" and adds 1.
enum FilterNumber { double_filter, sum_filter, narrow_filter, two_filter, table_filter, other_filter, filter_count };

/// Since power_up().
struct Log {
    std::vector<int> resets = std::vector<int>(filter_count);
    std::vector<std::uint64_t> samples = std::vector<std::uint64_t>(filter_count);
    std::uint64_t calls = 0;
    std::int32_t gain = 0;  // the setting, -5 .. 1000
    int gain_changes = 0;
    std::uint32_t ticks = 0;  // what the counter shows; each process call adds `ticks_a_call`
    std::uint32_t ticks_a_call = 0;
};
Log& log();

/// Changes to the board before halflsb_start; the defaults are a board with everything.
halflsb_board& board();
/// Restores the defaults, clears the log and starts the kit.
void power_up();
/// The same board, started again.
void start_again();

/// Bytes to the board, and polls until it is idle after each `poll_every` bytes (0: at the end).
void put(const Bytes& bytes, std::size_t poll_every = 0);
/// The contents (type and body) of the frames that the board has sent since the last call. A broken one fails the test.
std::vector<Bytes> take();
/// The same as it went over the line.
Bytes take_bytes();
/// Sends one frame and takes the answers.
std::vector<Bytes> ask(const Bytes& content);
/// The only answer, whose type must be as given.
Bytes ask_one(const Bytes& content, unsigned type);

/// START's content; opens with a new nonce and returns {block, credit}.
Bytes start_content(std::uint32_t nonce, unsigned filter, unsigned block, std::uint32_t nodes = 0);
struct Started {
    unsigned block = 0, credit = 0;
};
Started start(unsigned filter, unsigned block);

/// SAMPLES of 16-bit words.
Bytes samples_content(unsigned seq, const std::vector<std::int16_t>& samples);
std::vector<std::int16_t> words_of(const Bytes& response);

/// REFUSED of that type and number with that reason.
Bytes refused(unsigned type, unsigned number, unsigned reason);

/// Whether the filters see words in the wire's order or swapped.
inline constexpr bool is_swapped =
#ifdef HALFLSB_BIG_ENDIAN
    HALFLSB_BIG_ENDIAN != 0;
#else
    false;
#endif

}  // namespace kit_bench
