#include <catch2/catch.hpp>
#include <numeric>

#include "rigs/kit/layout.h"
#include "tests/kit/bench.hpp"

using namespace kit_bench;

namespace {

std::vector<std::int16_t> ramp(std::size_t count, int first = -20000, int step = 333) {
    std::vector<std::int16_t> samples(count);
    for (std::size_t i = 0; i < count; ++i) {
        samples[i] = static_cast<std::int16_t>(first + step * static_cast<int>(i % 120));
    }
    return samples;
}

std::vector<std::int16_t> doubled(std::vector<std::int16_t> samples) {
    for (std::int16_t& s : samples) s = static_cast<std::int16_t>(2 * s);
    return samples;
}

/// The largest block when an instant has so many bytes.
unsigned most_samples(unsigned instant_bytes) {
    return std::min<unsigned>(HALFLSB_BLOCK_SAMPLES, HALFLSB_BLOCK_BYTES / instant_bytes);
}

}  // namespace

TEST_CASE("stream: every block size from 1 to the largest gives each sample once", "[kit]") {
    power_up();
    for (unsigned block = 1; block <= HALFLSB_BLOCK_SAMPLES; ++block) {
        const Started started = start(double_filter, block);
        CHECK(started.block == block);
        CHECK(started.credit >= HALFLSB_CREDIT_BLOCKS);
        CHECK(started.credit <= 64);
        const auto samples = ramp(block);
        const Bytes response = ask_one(samples_content(0, samples), 0x90);
        CHECK(get16(response, 1) == 0);
        CHECK(words_of(response) == doubled(samples));
    }
    CHECK(log().samples[double_filter] == HALFLSB_BLOCK_SAMPLES * (HALFLSB_BLOCK_SAMPLES + 1ull) / 2);
}

TEST_CASE("stream: a block may be shorter than block_samples, down to one sample", "[kit]") {
    power_up();
    start(double_filter, HALFLSB_BLOCK_SAMPLES);
    for (unsigned seq = 0; seq < HALFLSB_BLOCK_SAMPLES; ++seq) {
        const auto samples = ramp(seq + 1);
        CHECK(words_of(ask_one(samples_content(seq, samples), 0x90)) == doubled(samples));
    }
}

TEST_CASE("stream: a block of none, half a sample, or one too many is refused and uses its number", "[kit]") {
    power_up();
    const unsigned block = HALFLSB_BLOCK_SAMPLES > 1 ? HALFLSB_BLOCK_SAMPLES - 1 : 1;
    start(double_filter, block);
    CHECK(ask(samples_content(0, {})) == std::vector<Bytes>{refused(0x10, 0, 5)});
    CHECK(ask(samples_content(1, {5}) + u8(1)) == std::vector<Bytes>{refused(0x10, 1, 5)});
    CHECK(ask(samples_content(2, ramp(block + 1))) == std::vector<Bytes>{refused(0x10, 2, 5)});
    CHECK(log().calls == 0);
    CHECK(words_of(ask_one(samples_content(3, ramp(block)), 0x90)) == doubled(ramp(block)));
    // Asked again, a refusal is given again.
    if (HALFLSB_CREDIT_BLOCKS > 1) {
        CHECK(ask(samples_content(2, ramp(block + 1))) == std::vector<Bytes>{refused(0x10, 2, 5)});
    }
}

TEST_CASE("stream: an output wider than the input does not overtake it in place", "[kit]") {
    power_up();
    const unsigned most = most_samples(4);
    if (most == 0) {
        CHECK(ask(start_content(1, sum_filter, 1)) == std::vector<Bytes>{refused(0x02, 1, 6)});
        return;
    }
    for (unsigned block = 1; block <= most; ++block) {
        CHECK(start(sum_filter, block).block == block);
        const auto samples = ramp(block, -30000, 7);
        const Bytes response = ask_one(samples_content(0, samples), 0x90);
        REQUIRE(response.size() == 10 + 4 * block);
        std::int32_t sum = 0;
        for (unsigned i = 0; i < block; ++i) {
            sum += samples[i];
            CHECK(static_cast<std::int32_t>(get32(response, 10 + 4 * i)) == sum);
        }
    }
}

TEST_CASE("stream: an output narrower than the input", "[kit]") {
    power_up();
    const unsigned most = most_samples(4);
    for (unsigned block = 1; block <= most; ++block) {
        CHECK(start(narrow_filter, block).block == block);
        Bytes content = u8(0x10) + u16(0);
        for (unsigned i = 0; i < block; ++i) content = std::move(content) + u32(0x80000000u + i * 0x10003u);
        const auto words = words_of(ask_one(content, 0x90));
        REQUIRE(words.size() == block);
        for (unsigned i = 0; i < block; ++i) {
            CHECK(words[i] == static_cast<std::int16_t>((0x80000000u + i * 0x10003u) >> 16));
        }
    }
}

TEST_CASE("stream: the samples of one instant stay together", "[kit]") {
    power_up();
    if (most_samples(4) == 0) return;
    const unsigned most = most_samples(4);
    start(two_filter, most);
    std::vector<std::int16_t> samples(2 * most), exchanged(2 * most);
    std::iota(samples.begin(), samples.end(), std::int16_t{1});
    for (std::size_t i = 0; i < samples.size(); ++i) exchanged[i] = samples[i ^ 1];
    CHECK(words_of(ask_one(samples_content(0, samples), 0x90)) == exchanged);
    CHECK(log().samples[two_filter] == most);
    CHECK(ask(samples_content(1, {1, 2, 3})) == std::vector<Bytes>{refused(0x10, 1, 5)});
}

TEST_CASE("stream: a filter of wider words is granted a smaller block", "[kit]") {
    power_up();
    if (most_samples(4) == 0) return;
    const Started started = start(sum_filter, HALFLSB_BLOCK_SAMPLES);
    CHECK(started.block == most_samples(4));
    CHECK(ask_one(samples_content(0, ramp(started.block)), 0x90).size() == 10 + 4 * started.block);
}

TEST_CASE("stream: smaller blocks are granted more credit, and all of it fits", "[kit]") {
    power_up();
    for (unsigned block = 1; block <= HALFLSB_BLOCK_SAMPLES; block = block * 2 + 1) {
        const Started started = start(double_filter, block);
        INFO("block " << block << ", credit " << started.credit);
        // The whole window, each frame as long as it can be (no zero byte, a delimiter in front), and a STATUS besides,
        // before the board does anything.
        Bytes window;
        const std::vector<std::int16_t> samples(block, 0x0101);
        for (unsigned seq = 0; seq < started.credit; ++seq) {
            window = std::move(window) + u8(0) + frame_of(samples_content(seq, samples));
        }
        put(window + u8(0) + frame_of(u8(0x03) + u32(0x01020304)));
        const auto answers = take();
        REQUIRE(answers.size() == started.credit + 1);
        for (unsigned seq = 0; seq < started.credit; ++seq) CHECK(get16(answers[seq], 1) == seq);
        CHECK(get32(answers.back(), 9) == 0);  // bytes_lost
        // And all of it is kept.
        put(window);
        CHECK(take().size() == started.credit);
        // Each place in the ring is at least as large as a LOAD, so tiny blocks gain nothing over small ones.
        if (block * 4 < HALFLSB_BLOCK_SAMPLES && HALFLSB_BLOCK_SAMPLES >= 61) {
            CHECK(started.credit > HALFLSB_CREDIT_BLOCKS);
        }
    }
}

TEST_CASE("stream: a board that claims less credit grants no more", "[kit]") {
    power_up();
    board().credit_blocks = 1;
    CHECK(start(double_filter, 1).credit == 1);
}

TEST_CASE("stream: sequence numbers wrap after 65536 frames", "[kit]") {
    power_up();
    start(double_filter, 1);
    std::uint64_t wrong = 0;
    for (unsigned n = 0; n < 65536 + 70; ++n) {
        const std::vector<std::int16_t> sample = {static_cast<std::int16_t>(n % 30000)};
        put(frame_of(samples_content(n % 65536, sample)));
        const auto answers = take();
        const bool right = answers.size() == 1 && answers[0][0] == 0x90 && get16(answers[0], 1) == n % 65536 &&
                           words_of(answers[0]) == doubled(sample);
        wrong += right ? 0 : 1;
    }
    CHECK(wrong == 0);
    // Across the wrap, a frame of before is still kept.
    CHECK(log().samples[double_filter] == 65536 + 70);
    CHECK(get16(ask_one(samples_content(69, {0}), 0x90), 1) == 69);
    CHECK(log().samples[double_filter] == 65536 + 70);
}

TEST_CASE("stream: before any START it is refused, reason 2", "[kit]") {
    power_up();
    for (unsigned type = 0x10; type <= 0x14; ++type) {
        CHECK(ask(u8(type) + u16(7) + u64(0)) == std::vector<Bytes>{refused(type, 7, 2)});
    }
    start(double_filter, 1);
    ask_one(samples_content(0, {1}), 0x90);
    start_again();
    CHECK(ask(samples_content(1, {1})) == std::vector<Bytes>{refused(0x10, 1, 2)});
}

TEST_CASE("start: each refusal has its reason and leaves the open stream alone", "[kit]") {
    power_up();
    start(double_filter, 1);
    ask_one(samples_content(0, {1}), 0x90);
    CHECK(ask(start_content(1, filter_count, 1)) == std::vector<Bytes>{refused(0x02, 1, 4)});
    CHECK(ask(start_content(2, 0, 0)) == std::vector<Bytes>{refused(0x02, 2, 5)});
    CHECK(ask(start_content(3, 0, HALFLSB_BLOCK_SAMPLES + 1)) == std::vector<Bytes>{refused(0x02, 3, 5)});
    CHECK(ask(start_content(4, 0, 1, 1)) == std::vector<Bytes>{refused(0x02, 4, 6)});
    CHECK(words_of(ask_one(samples_content(1, {2}), 0x90)) == std::vector<std::int16_t>{4});
}

TEST_CASE("start: the same nonce again changes nothing, a new one begins anew", "[kit]") {
    power_up();
    const Bytes first = ask_one(start_content(100, double_filter, 1), 0x82);
    CHECK(log().resets[double_filter] == 1);
    ask_one(samples_content(0, {1}), 0x90);
    CHECK(ask_one(start_content(100, double_filter, 1), 0x82) == first);
    CHECK(log().resets[double_filter] == 1);
    CHECK(get16(ask_one(samples_content(1, {1}), 0x90), 1) == 1);
    ask_one(start_content(101, double_filter, 1), 0x82);
    CHECK(log().resets[double_filter] == 2);
    // Replies kept from before are dropped: number 1 is ahead now.
    CHECK(ask(samples_content(1, {1})) == std::vector<Bytes>{u8(0x92) + u16(0)});
    CHECK(get16(ask_one(samples_content(0, {1}), 0x90), 1) == 0);
}

TEST_CASE("ticks: the total of a block, and the block's share of a sample rounded up", "[kit]") {
    power_up();
    const unsigned block = std::min(HALFLSB_BLOCK_SAMPLES, 10);
    start(double_filter, block);
    log().ticks = 0xFFFFF0u;  // the 24-bit counter wraps in the middle
    log().ticks_a_call = 95;
    Bytes response = ask_one(samples_content(0, ramp(block)), 0x90);
    CHECK(get32(response, 3) == 95);
    CHECK((get32(response, 6) >> 8) == (95 + block - 1) / block);

    board().tick_bits = 32;
    log().ticks_a_call = 0x80000000u;
    response = ask_one(samples_content(1, ramp(block)), 0x90);
    CHECK(get32(response, 3) == 0x80000000u);
    CHECK((get32(response, 6) >> 8) == 0xFFFFFFu);  // that or more

    board().tick_bits = 0;
    response = ask_one(samples_content(2, ramp(block)), 0x90);
    CHECK(get32(response, 3) == 0);
    CHECK((get32(response, 6) >> 8) == 0);
}
