#include "runner/wire/messages.hpp"

#include <cstdio>

#include "runner/wire/body.hpp"

namespace halflsb::message {
namespace {

template <class Message>
std::optional<Message> whole(const BodyReader& reader, Message&& message) {
    if (!reader.ended_well()) return std::nullopt;
    return std::forward<Message>(message);
}

Bytes copy_of(BytesView view) { return Bytes(view.begin(), view.end()); }

}  // namespace

std::string name_of(std::uint8_t type) {
    switch (static_cast<Type>(type)) {
        case Type::hello:
            return "HELLO";
        case Type::start:
            return "START";
        case Type::status:
            return "STATUS";
        case Type::echo:
            return "ECHO";
        case Type::samples:
            return "SAMPLES";
        case Type::reset:
            return "RESET";
        case Type::set:
            return "SET";
        case Type::load:
            return "LOAD";
        case Type::select:
            return "SELECT";
        case Type::greeting:
            return "GREETING";
        case Type::started:
            return "STARTED";
        case Type::counters:
            return "COUNTERS";
        case Type::echoed:
            return "ECHOED";
        case Type::response:
            return "RESPONSE";
        case Type::done:
            return "DONE";
        case Type::expect:
            return "EXPECT";
        case Type::refused:
            return "REFUSED";
    }
    char text[16];
    std::snprintf(text, sizeof text, "type 0x%02X", static_cast<unsigned>(type));
    return text;
}

std::string reason_text(std::uint8_t reason) {
    switch (reason) {
        case 1:
            return "unknown type";
        case 2:
            return "no stream is open: the board was restarted";
        case 3:
            return "not the current sample index";
        case 4:
            return "no such filter, setting or table";
        case 5:
            return "value or length out of range";
        case 6:
            return "not supported";
        default:
            return "reason " + std::to_string(reason) + ", which this version does not know";
    }
}

void encode(const Hello& m, Bytes& out) { BodyWriter(out).integer(m.nonce).integer(m.page); }
void encode(const Start& m, Bytes& out) {
    BodyWriter(out).integer(m.nonce).integer(m.filter).integer(m.block_samples).integer(m.nodes);
}
void encode(const Status& m, Bytes& out) { BodyWriter(out).integer(m.nonce); }
void encode(const Echo& m, Bytes& out) { BodyWriter(out).integer(m.nonce).bytes(m.bytes); }
void encode(const Samples& m, Bytes& out) { BodyWriter(out).integer(m.seq).bytes(m.words); }
void encode(const Reset& m, Bytes& out) { BodyWriter(out).integer(m.seq).integer(m.at); }
void encode(const Set& m, Bytes& out) {
    BodyWriter(out).integer(m.seq).integer(m.at).integer(m.setting).integer(m.value);
}
void encode(const Load& m, Bytes& out) {
    BodyWriter writer(out);
    writer.integer(m.seq).integer(m.at).integer(m.table).integer(m.offset);
    for (const std::int32_t value : m.values) writer.integer(value);
}
void encode(const Select& m, Bytes& out) { BodyWriter(out).integer(m.seq).integer(m.at).integer(m.filter); }
void encode(const GreetingPage& m, Bytes& out) {
    BodyWriter(out).integer(m.nonce).integer(m.page).integer(m.pages).bytes(m.rest);
}
void encode(const BoardPage& m, Bytes& out) {
    BodyWriter(out)
        .integer(m.protocol)
        .counted(m.build_id)
        .text(m.serial)
        .integer(m.filters)
        .integer(m.settings)
        .integer(m.max_block_samples)
        .integer(m.credit_blocks)
        .integer(m.tick_hz)
        .integer(m.tick_bits);
}
void encode(const FilterPage& m, Bytes& out) {
    BodyWriter page(out);
    page.text(m.name)
        .integer(m.injection)
        .integer(m.input)
        .integer(m.output)
        .integer(m.channels_in)
        .integer(m.channels_out)
        .integer(m.nodes)
        .integer(m.tables);
    if (m.up != 1 || m.down != 1) page.integer(m.up).integer(m.down);
}
void encode(const SettingPage& m, Bytes& out) {
    BodyWriter(out).text(m.name).integer(m.minimum).integer(m.maximum).integer(m.value);
}
void encode(const Started& m, Bytes& out) {
    BodyWriter(out).integer(m.nonce).integer(m.block_samples).integer(m.credit_blocks);
}
void encode(const Counters& m, Bytes& out) {
    BodyWriter(out)
        .integer(m.nonce)
        .integer(m.frames_bad)
        .integer(m.bytes_lost)
        .integer(m.gaps)
        .integer(m.resent)
        .integer(m.blocks);
}
void encode(const Response& m, Bytes& out) {
    BodyWriter(out).integer(m.seq).integer(m.ticks_total).integer(m.ticks_largest, 3).bytes(m.words);
}
void encode(const Done& m, Bytes& out) { BodyWriter(out).integer(m.seq).integer(m.at); }
void encode(const Expect& m, Bytes& out) { BodyWriter(out).integer(m.seq); }
void encode(const Refused& m, Bytes& out) { BodyWriter(out).integer(m.type).integer(m.seq).integer(m.reason); }

template <>
std::optional<Hello> decode(BytesView body) {
    Hello m;
    return whole(BodyReader(body).integer(m.nonce).integer(m.page), std::move(m));
}
template <>
std::optional<Start> decode(BytesView body) {
    Start m;
    return whole(BodyReader(body).integer(m.nonce).integer(m.filter).integer(m.block_samples).integer(m.nodes),
                 std::move(m));
}
template <>
std::optional<Status> decode(BytesView body) {
    Status m;
    return whole(BodyReader(body).integer(m.nonce), std::move(m));
}
template <>
std::optional<Echo> decode(BytesView body) {
    Echo m;
    BytesView bytes;
    const BodyReader reader = BodyReader(body).integer(m.nonce).rest(bytes);
    if (bytes.size() > largest_echo_bytes) return std::nullopt;
    m.bytes = copy_of(bytes);
    return whole(reader, std::move(m));
}
template <>
std::optional<Samples> decode(BytesView body) {
    Samples m;
    return whole(BodyReader(body).integer(m.seq).rest(m.words), std::move(m));
}
template <>
std::optional<Reset> decode(BytesView body) {
    Reset m;
    return whole(BodyReader(body).integer(m.seq).integer(m.at), std::move(m));
}
template <>
std::optional<Set> decode(BytesView body) {
    Set m;
    return whole(BodyReader(body).integer(m.seq).integer(m.at).integer(m.setting).integer(m.value), std::move(m));
}
template <>
std::optional<Load> decode(BytesView body) {
    Load m;
    BodyReader reader(body);
    reader.integer(m.seq).integer(m.at).integer(m.table).integer(m.offset);
    const std::size_t count = reader.bytes_left() / sizeof(std::int32_t);
    if (count < 1 || count > largest_load_values) return std::nullopt;
    for (std::size_t k = 0; k < count; ++k) reader.integer(m.values.emplace_back());
    return whole(reader, std::move(m));
}
template <>
std::optional<Select> decode(BytesView body) {
    Select m;
    return whole(BodyReader(body).integer(m.seq).integer(m.at).integer(m.filter), std::move(m));
}
template <>
std::optional<GreetingPage> decode(BytesView body) {
    GreetingPage m;
    return whole(BodyReader(body).integer(m.nonce).integer(m.page).integer(m.pages).rest(m.rest), std::move(m));
}
template <>
std::optional<BoardPage> decode(BytesView body) {
    BoardPage m;
    BytesView build_id;
    const BodyReader reader = BodyReader(body)
                                  .integer(m.protocol)
                                  .counted(build_id, largest_build_id_bytes)
                                  .text(m.serial, largest_text_bytes)
                                  .integer(m.filters)
                                  .integer(m.settings)
                                  .integer(m.max_block_samples)
                                  .integer(m.credit_blocks)
                                  .integer(m.tick_hz)
                                  .integer(m.tick_bits);
    m.build_id = copy_of(build_id);
    return whole(reader, std::move(m));
}
template <>
std::optional<FilterPage> decode(BytesView body) {
    FilterPage m;
    BodyReader reader(body);
    reader.text(m.name, largest_text_bytes)
        .integer(m.injection)
        .integer(m.input)
        .integer(m.output)
        .integer(m.channels_in)
        .integer(m.channels_out)
        .integer(m.nodes)
        .integer(m.tables);
    if (reader.bytes_left() > 0) reader.integer(m.up).integer(m.down);
    return whole(reader, std::move(m));
}
template <>
std::optional<SettingPage> decode(BytesView body) {
    SettingPage m;
    return whole(
        BodyReader(body).text(m.name, largest_text_bytes).integer(m.minimum).integer(m.maximum).integer(m.value),
        std::move(m));
}
template <>
std::optional<Started> decode(BytesView body) {
    Started m;
    return whole(BodyReader(body).integer(m.nonce).integer(m.block_samples).integer(m.credit_blocks), std::move(m));
}
template <>
std::optional<Counters> decode(BytesView body) {
    Counters m;
    return whole(BodyReader(body)
                     .integer(m.nonce)
                     .integer(m.frames_bad)
                     .integer(m.bytes_lost)
                     .integer(m.gaps)
                     .integer(m.resent)
                     .integer(m.blocks),
                 std::move(m));
}
template <>
std::optional<Response> decode(BytesView body) {
    Response m;
    return whole(BodyReader(body).integer(m.seq).integer(m.ticks_total).integer(m.ticks_largest, 3).rest(m.words),
                 std::move(m));
}
template <>
std::optional<Done> decode(BytesView body) {
    Done m;
    return whole(BodyReader(body).integer(m.seq).integer(m.at), std::move(m));
}
template <>
std::optional<Expect> decode(BytesView body) {
    Expect m;
    return whole(BodyReader(body).integer(m.seq), std::move(m));
}
template <>
std::optional<Refused> decode(BytesView body) {
    Refused m;
    return whole(BodyReader(body).integer(m.type).integer(m.seq).integer(m.reason), std::move(m));
}

}  // namespace halflsb::message
