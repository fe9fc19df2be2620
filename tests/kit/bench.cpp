#include "tests/kit/bench.hpp"

#include <catch2/catch.hpp>
#include <cstring>
#include <utility>

namespace kit_bench {

namespace {

Log the_log;
halflsb_board the_board;
Bytes written;
std::int64_t sum_state = 0;
std::int16_t table_of_four[4];
unsigned table_position = 0;
std::uint32_t next_nonce = 0xABCD0000u;

// Words as a filter of this machine sees them. In the swapped build the kit believes that the machine is big-endian, so
// they are taken the other way round.
std::int16_t read16(const void* words, std::size_t i) {
    std::uint16_t word = 0;
    std::memcpy(&word, static_cast<const char*>(words) + 2 * i, 2);
    return static_cast<std::int16_t>(is_swapped ? __builtin_bswap16(word) : word);
}
std::int32_t read32(const void* words, std::size_t i) {
    std::uint32_t word = 0;
    std::memcpy(&word, static_cast<const char*>(words) + 4 * i, 4);
    return static_cast<std::int32_t>(is_swapped ? __builtin_bswap32(word) : word);
}
void write16(void* words, std::size_t i, int value) {
    auto word = static_cast<std::uint16_t>(value & 0xFFFF);
    if (is_swapped) word = __builtin_bswap16(word);
    std::memcpy(static_cast<char*>(words) + 2 * i, &word, 2);
}
void write32(void* words, std::size_t i, std::int32_t value) {
    auto word = static_cast<std::uint32_t>(value);
    if (is_swapped) word = __builtin_bswap32(word);
    std::memcpy(static_cast<char*>(words) + 4 * i, &word, 4);
}

template <int number>
void reset() {
    ++the_log.resets[number];
    if (number == sum_filter) sum_state = 0;
    if (number == table_filter) table_position = 0;
}

void called(int number, const void* in, unsigned word_bytes, std::uint16_t count) {
    ++the_log.calls;
    the_log.samples[static_cast<std::size_t>(number)] += count;
    the_log.ticks += the_log.ticks_a_call;
    CHECK(reinterpret_cast<std::uintptr_t>(in) % word_bytes == 0);
    CHECK(count >= 1);
}

void process_double(const void* in, void* out, std::uint16_t count) {
    called(double_filter, in, 2, count);
    for (std::size_t i = 0; i < count; ++i) write16(out, i, 2 * read16(in, i));
}
void process_sum(const void* in, void* out, std::uint16_t count) {
    called(sum_filter, in, 2, count);
    CHECK(reinterpret_cast<std::uintptr_t>(out) % 4 == 0);
    for (std::size_t i = 0; i < count; ++i) {
        sum_state += read16(in, i);
        write32(out, i, static_cast<std::int32_t>(sum_state));
    }
}
void process_narrow(const void* in, void* out, std::uint16_t count) {
    called(narrow_filter, in, 4, count);
    for (std::size_t i = 0; i < count; ++i) write16(out, i, read32(in, i) >> 16);
}
void process_two(const void* in, void* out, std::uint16_t count) {
    called(two_filter, in, 2, count);
    for (std::size_t i = 0; i < count; ++i) {
        const int left = read16(in, 2 * i), right = read16(in, 2 * i + 1);
        write16(out, 2 * i, right);
        write16(out, 2 * i + 1, left);
    }
}
void process_table(const void* in, void* out, std::uint16_t count) {
    called(table_filter, in, 2, count);
    for (std::size_t i = 0; i < count; ++i) write16(out, i, read16(in, i) * table_of_four[table_position++ % 4]);
}
void process_other(const void* in, void* out, std::uint16_t count) {
    called(other_filter, in, 2, count);
    for (std::size_t i = 0; i < count; ++i) write16(out, i, 2 * read16(in, i) + 1);
}
int load(std::uint8_t table, std::uint16_t offset, const std::int32_t* values, std::uint8_t count) {
    if (table != 0 || offset + count > 4) return 0;
    for (int i = 0; i < count; ++i) table_of_four[offset + i] = static_cast<std::int16_t>(values[i]);
    return 1;
}

const halflsb_filter filters[filter_count] = {
    {"double", HALFLSB_CALL, HALFLSB_Q15, HALFLSB_Q15, 1, 1, 0, reset<double_filter>, process_double,
     nullptr KIT_STEADY},
    {"sum", HALFLSB_BUFFER, HALFLSB_I16, HALFLSB_I32, 1, 1, 0, reset<sum_filter>, process_sum, nullptr KIT_STEADY},
    {"narrow", HALFLSB_CONVERTER, HALFLSB_Q31, HALFLSB_Q15, 1, 1, 0, reset<narrow_filter>, process_narrow,
     nullptr KIT_STEADY},
    {"two", HALFLSB_CALL, HALFLSB_Q15, HALFLSB_Q15, 2, 2, 0, reset<two_filter>, process_two, nullptr KIT_STEADY},
    {"table", HALFLSB_CALL, HALFLSB_Q15, HALFLSB_Q15, 1, 1, 1, reset<table_filter>, process_table, load KIT_STEADY},
    {"other double, 24 bytes...and more", HALFLSB_CALL, HALFLSB_Q15, HALFLSB_Q15, 1, 1, 0, reset<other_filter>,
     process_other, nullptr KIT_STEADY},
};
const std::uint8_t build_id[20] = {1, 2, 3, 4, 5, 0, 0, 8, 9, 10, 11, 12, 13, 14, 15, 16, 17, 18, 19, 255};

void gain_changed() { ++the_log.gain_changes; }
halflsb_setting gain = {"gain", -5, 1000, &the_log.gain, gain_changed};

std::uint32_t ticks() { return the_log.ticks; }
void write(const std::uint8_t* bytes, std::size_t count) {
    CHECK(count > 0);
    written.insert(written.end(), bytes, bytes + count);
}

}  // namespace

Bytes cobs_of(const Bytes& content) {
    Bytes out(1);
    std::size_t code_at = 0;
    std::uint8_t code = 1;
    for (std::size_t i = 0; i < content.size(); ++i) {
        if (content[i] != 0) {
            out.push_back(content[i]);
            ++code;
        }
        if (content[i] == 0 || (code == 0xFF && i + 1 < content.size())) {
            out[code_at] = code;
            code_at = out.size();
            out.push_back(0);
            code = 1;
        }
    }
    out[code_at] = code;
    return out;
}

std::optional<Bytes> content_of_cobs(const Bytes& encoded) {
    Bytes out;
    for (std::size_t at = 0; at < encoded.size();) {
        const std::size_t code = encoded[at];
        if (code == 0 || at + code > encoded.size()) return std::nullopt;
        out.insert(out.end(), encoded.begin() + static_cast<std::ptrdiff_t>(at + 1),
                   encoded.begin() + static_cast<std::ptrdiff_t>(at + code));
        at += code;
        if (code < 0xFF && at < encoded.size()) out.push_back(0);
    }
    return out;
}

std::uint32_t crc_of(const Bytes& bytes) {
    std::uint32_t crc = 0xFFFFFFFFu;
    for (std::uint8_t byte : bytes) {
        crc ^= byte;
        for (int bit = 0; bit < 8; ++bit) crc = (crc >> 1) ^ ((crc & 1u) != 0 ? 0xEDB88320u : 0u);
    }
    return ~crc;
}

Bytes u8(unsigned value) { return {static_cast<std::uint8_t>(value)}; }
Bytes u16(unsigned value) { return u8(value & 0xFFu) + u8((value >> 8) & 0xFFu); }
Bytes u32(std::uint32_t value) { return u16(value & 0xFFFFu) + u16(value >> 16); }
Bytes u64(std::uint64_t value) {
    return u32(static_cast<std::uint32_t>(value)) + u32(static_cast<std::uint32_t>(value >> 32));
}
Bytes operator+(Bytes a, const Bytes& b) {
    a.insert(a.end(), b.begin(), b.end());
    return a;
}
std::uint32_t get16(const Bytes& bytes, std::size_t at) { return bytes.at(at) | std::uint32_t{bytes.at(at + 1)} << 8; }
std::uint32_t get32(const Bytes& bytes, std::size_t at) { return get16(bytes, at) | get16(bytes, at + 2) << 16; }

Bytes frame_of(const Bytes& content) { return cobs_of(content + u32(crc_of(content))) + u8(0); }

Log& log() { return the_log; }
halflsb_board& board() { return the_board; }

void start_again() {
    halflsb_start(&the_board);
    written.clear();
}

void power_up() {
    the_log = Log{};
    sum_state = 0;
    for (std::int16_t& word : table_of_four) word = 1;
    the_board = halflsb_board{};
    the_board.build_id = build_id;
    the_board.build_id_bytes = sizeof build_id;
    the_board.serial = "CW-7-0042";
    the_board.filters = filters;
    the_board.filter_count = filter_count;
    the_board.settings = &gain;
    the_board.setting_count = 1;
    the_board.tick_hz = 1'000'000;
    the_board.tick_bits = 24;
    the_board.ticks = ticks;
    the_board.write = write;
    start_again();
}

void put(const Bytes& bytes, std::size_t poll_every) {
    std::size_t count = 0;
    for (std::uint8_t byte : bytes) {
        halflsb_receive_byte(byte);
        if (poll_every != 0 && ++count % poll_every == 0) {
            while (halflsb_poll() != 0) {
            }
        }
    }
    while (halflsb_poll() != 0) {
    }
}

Bytes take_bytes() { return std::exchange(written, {}); }

std::vector<Bytes> take() {
    std::vector<Bytes> contents;
    Bytes encoded;
    for (std::uint8_t byte : take_bytes()) {
        if (byte != 0) {
            encoded.push_back(byte);
            continue;
        }
        if (encoded.empty()) continue;
        const std::optional<Bytes> content = content_of_cobs(std::exchange(encoded, {}));
        REQUIRE(content);
        REQUIRE(content->size() >= 5);
        const Bytes body(content->begin(), content->end() - 4);
        REQUIRE(get32(*content, body.size()) == crc_of(body));
        contents.push_back(body);
    }
    REQUIRE(encoded.empty());
    return contents;
}

std::vector<Bytes> ask(const Bytes& content) {
    put(frame_of(content));
    return take();
}

Bytes ask_one(const Bytes& content, unsigned type) {
    const std::vector<Bytes> answers = ask(content);
    REQUIRE(answers.size() == 1);
    REQUIRE(answers[0][0] == type);
    return answers[0];
}

Bytes start_content(std::uint32_t nonce, unsigned filter, unsigned block, std::uint32_t nodes) {
    return u8(0x02) + u32(nonce) + u8(filter) + u16(block) + u32(nodes);
}

Started start(unsigned filter, unsigned block) {
    const Bytes started = ask_one(start_content(++next_nonce, filter, block), 0x82);
    REQUIRE(started.size() == 8);
    REQUIRE(get32(started, 1) == next_nonce);
    return {get16(started, 5), started[7]};
}

Bytes samples_content(unsigned seq, const std::vector<std::int16_t>& samples) {
    Bytes content = u8(0x10) + u16(seq);
    for (std::int16_t sample : samples) content = std::move(content) + u16(static_cast<std::uint16_t>(sample));
    return content;
}

std::vector<std::int16_t> words_of(const Bytes& response) {
    std::vector<std::int16_t> words;
    for (std::size_t at = 10; at < response.size(); at += 2) {
        words.push_back(static_cast<std::int16_t>(get16(response, at)));
    }
    return words;
}

Bytes refused(unsigned type, unsigned number, unsigned reason) {
    return u8(0xFF) + u8(type) + u16(number) + u8(reason);
}

}  // namespace kit_bench
