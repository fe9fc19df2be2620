// How codes lie in bytes. NumPy packs the same words in tests/reference/stimuli_test.py.
#include <array>
#include <catch2/catch.hpp>

#include "make.hpp"
#include "stimuli/npy.hpp"

using namespace halflsb;

namespace {

SampleFormat laid_out(std::string_view name, Justification justification, ByteOrder order = ByteOrder::little) {
    const auto format = with_layout(format_named(name), justification, order);
    REQUIRE(format);
    return *format;
}

using Bytes = std::vector<unsigned>;

Bytes sent(const SampleFormat& format, std::vector<Code> codes) {
    std::vector<std::byte> bytes(codes.size() * format.word_bytes());
    to_wire_bytes(format, codes, bytes);
    Bytes numbers;
    for (const std::byte b : bytes) numbers.push_back(std::to_integer<unsigned>(b));
    return numbers;
}

std::vector<Code> received(const SampleFormat& format, const Bytes& numbers) {
    std::vector<std::byte> bytes;
    for (const unsigned number : numbers) bytes.push_back(static_cast<std::byte>(number));
    std::vector<Code> codes(bytes.size() / format.word_bytes());
    from_wire_bytes(format, bytes, codes);
    return codes;
}

std::string refused_layout(std::string_view name, Justification justification) {
    const auto format = with_layout(format_named(name), justification, ByteOrder::little);
    return format ? "accepted" : to_text(format.error());
}

}  // namespace

TEST_CASE("sample layout: u12 lies right or left in two bytes, in either order", "[stimuli]") {
    CHECK(sent(laid_out("u12", Justification::right), {0xabc, 0}) == Bytes{0xbc, 0x0a, 0, 0});
    CHECK(sent(laid_out("u12", Justification::right, ByteOrder::big), {0xabc}) == Bytes{0x0a, 0xbc});
    CHECK(sent(laid_out("u12", Justification::left), {0xabc}) == Bytes{0xc0, 0xab});
    CHECK(sent(laid_out("u12", Justification::left, ByteOrder::big), {0xabc}) == Bytes{0xab, 0xc0});
    CHECK(received(laid_out("u12", Justification::left), {0xc0, 0xab}) == std::vector<Code>{0xabc});
}

TEST_CASE("sample layout: i24 lies right, left or packed, its sign extended", "[stimuli]") {
    CHECK(sent(format_named("i24"), {0x123456, -2}) == Bytes{0x56, 0x34, 0x12, 0, 0xfe, 0xff, 0xff, 0xff});
    CHECK(sent(laid_out("i24", Justification::left), {0x123456, -2}) ==
          Bytes{0, 0x56, 0x34, 0x12, 0, 0xfe, 0xff, 0xff});
    CHECK(sent(laid_out("i24", Justification::packed), {0x123456, -2}) == Bytes{0x56, 0x34, 0x12, 0xfe, 0xff, 0xff});
    CHECK(sent(laid_out("i24", Justification::packed, ByteOrder::big), {0x123456, -2}) ==
          Bytes{0x12, 0x34, 0x56, 0xff, 0xff, 0xfe});
}

TEST_CASE("sample layout: a float may be big-endian", "[stimuli]") {
    CHECK(sent(laid_out("f32", Justification::right, ByteOrder::big), {0x3f800000}) == Bytes{0x3f, 0x80, 0, 0});
}

TEST_CASE("sample layout: every format in every layout brings its codes back", "[stimuli]") {
    int layouts = 0;
    for (const SampleFormat& plain : sample_formats()) {
        for (const Justification justification : {Justification::right, Justification::left, Justification::packed}) {
            for (const ByteOrder order : {ByteOrder::little, ByteOrder::big}) {
                const auto format = with_layout(plain, justification, order);
                if (!format) continue;
                ++layouts;
                INFO(text_of(*format));
                const auto half = static_cast<Code>((std::int64_t{1} << (plain.word_bits - 1)) - 1);
                const Code zero = zero_code(plain);
                const std::vector<Code> codes = {zero - half - 1, zero - half, zero - 1, zero, zero + 1, zero + half};
                CHECK(received(*format, sent(*format, codes)) == codes);
                const auto again = sample_format_of_wire_code(wire_code_of(*format));
                REQUIRE(again);
                CHECK(*again == *format);
            }
        }
    }
    CHECK(layouts == 11 * 2 + 2 * 2 + 2);  // right; left for u12 and i24; packed for i24
}

TEST_CASE("sample layout: a right-justified container keeps what is no code, so that it shows", "[stimuli]") {
    CHECK(received(format_named("u12"), {0xff, 0x1f, 0x00, 0xf0}) == std::vector<Code>{8191, 0xf000});
    CHECK(received(format_named("i24"), {0, 0, 0, 0x01, 0, 0, 0, 0x80}) ==
          std::vector<Code>{0x01000000, std::numeric_limits<Code>::min()});
    CHECK(received(laid_out("u12", Justification::left), {0xcf, 0xab}) == std::vector<Code>{0xabc});
    CHECK(received(format_named("u8"), {0xff}) == std::vector<Code>{255});
    CHECK(received(format_named("i8"), {0xff}) == std::vector<Code>{-1});
    CHECK(received(format_named("u16"), {0xff, 0xff}) == std::vector<Code>{65535});
}

TEST_CASE("sample layout: one byte has no order, a full container no left, only i24 is packed", "[stimuli]") {
    CHECK(laid_out("u8", Justification::right, ByteOrder::big) == format_named("u8"));
    CHECK(text_of(laid_out("i24", Justification::left, ByteOrder::big)) == "i24, left-justified, big-endian");
    CHECK(text_of(laid_out("i24", Justification::packed)) == "i24, packed");
    CHECK(text_of(format_named("u12")) == "u12");
    CHECK(refused_layout("q15", Justification::left) ==
          "justification: q15 has no room to the left: it fills its 2 bytes\n"
          "  leave it out; only u12 and i24 have spare bits");
    CHECK(refused_layout("u12", Justification::packed) ==
          "justification: u12 cannot be packed\n  leave it out; only i24 has a byte to save");
    CHECK_FALSE(sample_format_of_wire_code(0x60 | 8));  // no justification 3
    CHECK_FALSE(sample_format_of_wire_code(0x20 | 1));  // no left of q15
}

TEST_CASE("sample layout: on disk the layout does not matter", "[stimuli]") {
    std::array<std::byte, 4> bytes{};
    std::array<Code, 2> back{};
    const std::array<Code, 2> codes = {0xabc, 0x1fff};
    to_npy_bytes(laid_out("u12", Justification::left, ByteOrder::big), codes, bytes);
    CHECK(std::to_integer<unsigned>(bytes[0]) == 0xbc);
    from_npy_bytes(format_named("u12"), bytes, back);
    CHECK(back == codes);
    CHECK(descriptor_of(npy_type_of(format_named("u12"))) == "<u2");
    CHECK(descriptor_of(npy_type_of(format_named("i24"))) == "<i4");
    CHECK(descriptor_of(npy_type_of(format_named("u8"))) == "|u1");
    CHECK(descriptor_of(npy_type_of(format_named("q7"))) == "|i1");
}
