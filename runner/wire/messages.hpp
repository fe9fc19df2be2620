// The message bodies of docs/wire.md, both directions: encode() appends a body, decode() takes one apart.
// decode() gives nothing when a body is too short, too long, or a text in it longer than allowed; whether
// the values make sense is for the session to judge.
#pragma once

#include <cstddef>
#include <cstdint>
#include <optional>
#include <span>
#include <string>
#include <string_view>
#include <vector>

namespace halflsb::message {

using Bytes = std::vector<std::byte>;
using BytesView = std::span<const std::byte>;

enum class Type : std::uint8_t {
    hello = 0x01,
    start = 0x02,
    status = 0x03,
    echo = 0x04,
    samples = 0x10,
    reset = 0x11,
    set = 0x12,
    load = 0x13,
    select = 0x14,
    greeting = 0x81,
    started = 0x82,
    counters = 0x83,
    echoed = 0x84,
    response = 0x90,
    done = 0x91,
    expect = 0x92,
    refused = 0xFF,
};
/// "GREETING"; "type 0x33" for one that does not exist.
std::string name_of(std::uint8_t type);
/// True for the types that only a host sends.
constexpr bool is_for_the_board(std::uint8_t type) { return type < 0x80; }

constexpr std::uint8_t protocol_version = 1;
constexpr std::size_t largest_text_bytes = 24, largest_build_id_bytes = 32, largest_echo_bytes = 32;
constexpr std::size_t largest_load_values = 8;
/// Content of the largest message outside the stream: page 0 of a greeting with everything full.
constexpr std::size_t largest_page_content_bytes = 80;
/// Of the bodies of SAMPLES (seq) and RESPONSE (seq, ticks), what stands before the samples.
constexpr std::size_t samples_fixed_bytes = 2, response_fixed_bytes = 9;
/// The words of one block, all channels: the largest block that a greeting can name at 4 bytes. With several channels
/// the host asks for smaller blocks.
constexpr std::size_t largest_words_bytes = std::size_t{4} * 65535;
/// Content of a RESPONSE of such a block, with type and CRC.
constexpr std::size_t largest_stream_content_bytes = 5 + response_fixed_bytes + largest_words_bytes;

struct Hello {
    std::uint32_t nonce = 0;
    std::uint8_t page = 0;
};
struct Start {
    std::uint32_t nonce = 0;
    std::uint8_t filter = 0;
    std::uint16_t block_samples = 0;
    std::uint32_t nodes = 0;
};
struct Status {
    std::uint32_t nonce = 0;
};
/// ECHO and ECHOED.
struct Echo {
    std::uint32_t nonce = 0;
    Bytes bytes;
};

struct Samples {
    std::uint16_t seq = 0;
    BytesView words;
};
struct Reset {
    std::uint16_t seq = 0;
    std::uint64_t at = 0;
};
struct Set {
    std::uint16_t seq = 0;
    std::uint64_t at = 0;
    std::uint8_t setting = 0;
    std::int32_t value = 0;
};
struct Load {
    std::uint16_t seq = 0;
    std::uint64_t at = 0;
    std::uint8_t table = 0;
    std::uint16_t offset = 0;
    std::vector<std::int32_t> values;
};
struct Select {
    std::uint16_t seq = 0;
    std::uint64_t at = 0;
    std::uint8_t filter = 0;
};

/// Of every page; `rest` is the page itself.
struct GreetingPage {
    std::uint32_t nonce = 0;
    std::uint8_t page = 0, pages = 0;
    BytesView rest;
};
/// Page 0.
struct BoardPage {
    std::uint8_t protocol = 0;
    Bytes build_id;
    std::string serial;
    std::uint8_t filters = 0, settings = 0;
    std::uint16_t max_block_samples = 0;
    std::uint8_t credit_blocks = 0;
    std::uint32_t tick_hz = 0;
    std::uint8_t tick_bits = 0;
};
struct FilterPage {
    std::string name;
    std::uint8_t injection = 0, input = 0, output = 0, channels_in = 0, channels_out = 0, nodes = 0, tables = 0;
    std::uint16_t up = 1, down = 1;  ///< travel only where one of them is not 1
};
struct SettingPage {
    std::string name;
    std::int32_t minimum = 0, maximum = 0, value = 0;
};

struct Started {
    std::uint32_t nonce = 0;
    std::uint16_t block_samples = 0;
    std::uint8_t credit_blocks = 0;
};
struct Counters {
    std::uint32_t nonce = 0, frames_bad = 0, bytes_lost = 0, gaps = 0, resent = 0, blocks = 0;
};
/// ticks_largest has 24 bits on the wire; 0xFFFFFF means that or more.
struct Response {
    std::uint16_t seq = 0;
    std::uint32_t ticks_total = 0, ticks_largest = 0;
    BytesView words;
};
struct Done {
    std::uint16_t seq = 0;
    std::uint64_t at = 0;
};
struct Expect {
    std::uint16_t seq = 0;
};
struct Refused {
    std::uint8_t type = 0;
    std::uint16_t seq = 0;
    std::uint8_t reason = 0;
};

void encode(const Hello&, Bytes&);
void encode(const Start&, Bytes&);
void encode(const Status&, Bytes&);
void encode(const Echo&, Bytes&);
void encode(const Samples&, Bytes&);
void encode(const Reset&, Bytes&);
void encode(const Set&, Bytes&);
void encode(const Load&, Bytes&);
void encode(const Select&, Bytes&);
void encode(const GreetingPage&, Bytes&);
void encode(const BoardPage&, Bytes&);
void encode(const FilterPage&, Bytes&);
void encode(const SettingPage&, Bytes&);
void encode(const Started&, Bytes&);
void encode(const Counters&, Bytes&);
void encode(const Response&, Bytes&);
void encode(const Done&, Bytes&);
void encode(const Expect&, Bytes&);
void encode(const Refused&, Bytes&);

/// Defined for each struct above. Views refer into `body`.
template <class Message>
std::optional<Message> decode(BytesView body);

/// What docs/wire.md says of a reason of REFUSED.
std::string reason_text(std::uint8_t reason);

}  // namespace halflsb::message
