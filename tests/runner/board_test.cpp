// Whether the board's greeting agrees with the plan's signal.
#include "runner/board.hpp"

#include <catch2/catch.hpp>

using namespace halflsb;

namespace {

SampleFormat laid_out(const char* name, Justification justification, ByteOrder byte_order) {
    auto made = with_layout(*sample_format(name), justification, byte_order);
    REQUIRE(made);
    return *made;
}

Greeting greeting_with(const std::string& name, const SampleFormat& format, int in, int out) {
    Greeting greeting;
    BoardFilter filter;
    filter.name = name;
    filter.input = filter.output = format;
    filter.channels_in = in;
    filter.channels_out = out;
    greeting.filters.push_back(filter);
    return greeting;
}

Signal signal_with(const SampleFormat& format, int channels) {
    Signal signal;
    signal.input = signal.output = format;
    signal.channels = channels;
    return signal;
}

std::string refusal(const Greeting& greeting, const Signal& signal) {
    const auto refused = agreeing_filter(greeting, signal, "port");
    REQUIRE_FALSE(refused);
    CHECK(refused.error().kind == ErrorKind::bench);
    return to_text(refused.error());
}

const std::string remedy =
    "\n  the plan's [signal] states facts of the firmware: correct it, or flash the firmware it is about";

}  // namespace

TEST_CASE("board: channels must be those of the plan, in and out", "[run]") {
    const SampleFormat q15 = *sample_format("q15");
    CHECK(agreeing_filter(greeting_with("pair", q15, 2, 2), signal_with(q15, 2), "port").value() == 0);
    CHECK(refusal(greeting_with("pair", q15, 2, 2), signal_with(q15, 1)) ==
          "port: filter \"pair\" has channels 2 in, 2 out, the plan says 1 in, 1 out" + remedy);
    CHECK(refusal(greeting_with("mix", q15, 2, 1), signal_with(q15, 2)) ==
          "port: filter \"mix\" has channels 2 in, 1 out, the plan says 2 in, 2 out" + remedy);
    CHECK(refusal(greeting_with("split", q15, 1, 2), signal_with(q15, 2)) ==
          "port: filter \"split\" has channels 1 in, 2 out, the plan says 2 in, 2 out" + remedy);
}

TEST_CASE("board: formats must agree with their layout", "[run]") {
    const SampleFormat little = *sample_format("i16");
    const SampleFormat big = laid_out("i16", Justification::right, ByteOrder::big);
    CHECK(agreeing_filter(greeting_with("f", big, 1, 1), signal_with(big, 1), "port"));
    CHECK(refusal(greeting_with("f", big, 1, 1), signal_with(little, 1)) ==
          "port: filter \"f\" has input i16, big-endian, the plan says i16" + remedy);
    Signal mixed = signal_with(little, 1);
    mixed.output = big;
    CHECK(refusal(greeting_with("f", little, 1, 1), mixed) ==
          "port: filter \"f\" has output i16, the plan says i16, big-endian" + remedy);
}
