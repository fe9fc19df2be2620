// Nothing that comes over the line may crash the kit, write outside its arrays (the asan build watches), or stop it.
#include <catch2/catch.hpp>
#include <random>

#include "tests/kit/bench.hpp"

using namespace kit_bench;

namespace {

std::uint32_t fresh_seed() { return Catch::rngSeed() != 0 ? Catch::rngSeed() : std::random_device{}(); }

/// 32 bits a draw, as uint32_t on every machine.
class Draw {
public:
    explicit Draw(std::uint32_t seed) : generator_(seed) {}
    std::uint32_t operator()() { return static_cast<std::uint32_t>(generator_()); }

private:
    std::mt19937 generator_;
};

/// The board still answers, whatever came before.
void check_alive(std::uint32_t nonce) {
    put({});     // works off what is there: a full ring has no room for a delimiter
    put(u8(0));  // ends what was cut
    take_bytes();
    CHECK(ask_one(u8(0x03) + u32(nonce), 0x83).size() == 25);
    const unsigned credit = start(double_filter, HALFLSB_BLOCK_SAMPLES).credit;
    for (unsigned seq = 0; seq < credit + 1; ++seq) {
        CHECK(words_of(ask_one(samples_content(seq, {21}), 0x90)) == std::vector<std::int16_t>{42});
    }
}

}  // namespace

TEST_CASE("garbage: random bytes never stop the board", "[kit]") {
    const std::uint32_t seed = fresh_seed();
    INFO("seed " << seed);
    Draw generator(seed);
    for (int round = 0; round < 30; ++round) {
        power_up();
        if (round % 2 == 1) start(HALFLSB_WORD_BYTES >= 4 ? sum_filter : double_filter, 1);
        const unsigned zero_in = 2 + generator() % 300;
        for (int i = 0; i < 5000; ++i) {
            const bool zero = generator() % zero_in == 0;
            halflsb_receive_byte(zero ? std::uint8_t{0} : static_cast<std::uint8_t>(generator() & 0xFFu));
            if (generator() % 3 == 0) halflsb_poll();
        }
        check_alive(generator());
    }
}

TEST_CASE("garbage: random contents with a good CRC never stop the board", "[kit]") {
    const std::uint32_t seed = fresh_seed();
    INFO("seed " << seed);
    Draw generator(seed);
    for (int round = 0; round < 30; ++round) {
        power_up();
        if (round % 3 != 0) start(table_filter, HALFLSB_BLOCK_SAMPLES);
        unsigned seq = 0;
        for (int i = 0; i < 400; ++i) {
            static constexpr unsigned types[] = {0x01, 0x02, 0x03, 0x04, 0x10, 0x11,
                                                 0x12, 0x13, 0x14, 0x15, 0x81, 0xFF};
            Bytes content = u8(generator() % 8 == 0 ? generator() & 0xFFu : types[generator() % std::size(types)]);
            // Mostly the number that is expected next, so that the bodies are looked at.
            if (generator() % 10 != 0)
                content = std::move(content) + u16(generator() % 5 == 0 ? generator() & 0xFFFFu : seq);
            const unsigned longest = 8 + 2 * HALFLSB_BLOCK_SAMPLES * HALFLSB_WORD_BYTES;
            const unsigned length = generator() % (generator() % 2 == 0 ? 14 : longest);
            for (unsigned k = 0; k < length; ++k) {
                content.push_back(static_cast<std::uint8_t>(generator() % 2 == 0 ? 0 : generator() & 0xFFu));
            }
            put(frame_of(content), 1 + generator() % 50);
            for (const Bytes& answer : take()) {
                if (answer[0] == 0x92) seq = get16(answer, 1);
                if (answer[0] == 0x90 || answer[0] == 0x91) seq = (get16(answer, 1) + 1) & 0xFFFFu;
                if (answer[0] == 0xFF && answer[1] >= 0x10 && answer[1] <= 0x14 && answer[4] != 2) ++seq;
                if (answer[0] == 0x82) seq = 0;
                CHECK(answer[0] >= 0x81);
            }
        }
        check_alive(generator());
    }
}

TEST_CASE("garbage: every pair of bytes as a frame", "[kit]") {
    power_up();
    for (unsigned first = 0; first < 256; ++first) {
        for (unsigned second = 0; second < 256; ++second) put(u8(first) + u8(second) + u8(0));
    }
    CHECK(take().empty());
    check_alive(1);
}
