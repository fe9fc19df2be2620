// What a board says of itself, and what is refused.
#include "runner/wire/greeting.hpp"

#include <catch2/catch.hpp>

#include "tests/runner/wire/bench.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

Error refused_greeting(Bench& bench) {
    const Outcome<Greeting> greeting = bench.session().greet();
    REQUIRE_FALSE(greeting);
    return greeting.error();
}

const std::string prefix = "the board's greeting cannot be used: ";

}  // namespace

TEST_CASE("greeting: every field arrives", "[wire]") {
    Bench bench;
    bench.board.filters[1].injection = 2;
    bench.board.filters[1].input = 3;
    bench.board.filters[1].output = 4;
    bench.board.filters[1].channels_in = 2;
    bench.board.filters[1].channels_out = 3;
    bench.board.filters[1].nodes = 5;
    bench.board.filters[1].tables = 1;
    bench.board.settings.push_back({"Dämpfung", -5, 7, 3});
    const Outcome<Greeting> greeting = bench.session().greet();
    REQUIRE(greeting);
    CHECK(greeting->protocol == 1);
    CHECK(greeting->build_id == "abcd01");
    CHECK(greeting->serial == "CW7-0042");
    CHECK(greeting->max_block_samples == 256);
    CHECK(greeting->credit_blocks == 4);
    CHECK(greeting->tick_hz == 168'000'000);
    CHECK(greeting->tick_bits == 32);
    REQUIRE(greeting->filters.size() == 2);
    CHECK(greeting->filters[0].name == "pass");
    CHECK(greeting->filters[0].injection == Injection::call);
    CHECK(greeting->filters[0].input.name == "q15");
    const BoardFilter& second = greeting->filters[1];
    CHECK(second.injection == Injection::converter);
    CHECK(name_of(second.injection) == "converter");
    CHECK(second.input.name == "i16");
    CHECK(second.output.name == "i32");
    CHECK(second.channels_in == 2);
    CHECK(second.channels_out == 3);
    CHECK(second.nodes == 5);
    CHECK(second.tables == 1);
    REQUIRE(greeting->settings.size() == 1);
    CHECK(greeting->settings[0].name == "Dämpfung");
    CHECK(greeting->settings[0].minimum == -5);
    CHECK(greeting->settings[0].maximum == 7);
    CHECK(greeting->settings[0].value == 3);
}

TEST_CASE("greeting: everything as long as it may be", "[wire]") {
    Bench bench;
    bench.board.build_id.assign(32, std::byte{0xEE});
    bench.board.serial = std::string(24, 's');
    bench.board.filters.assign(100, {});
    for (std::size_t k = 0; k < 100; ++k)
        bench.board.filters[k].name = "a filter with number " + std::to_string(100 + k);
    bench.board.settings.assign(100, {"setting", 0, 1, 0});
    const Outcome<Greeting> greeting = bench.session().greet();
    REQUIRE(greeting);
    CHECK(greeting->filters.size() == 100);
    CHECK(greeting->filters[99].name == "a filter with number 199");
    CHECK(greeting->settings.size() == 100);
    CHECK(greeting->build_id.size() == 64);
}

TEST_CASE("greeting: stale bytes and a boot banner do not hide it", "[wire]") {
    Bench bench;
    const std::string banner = "CW-7 boot 1.4\r\nselftest ok\r\n";
    bench.link.say(std::as_bytes(std::span(banner.data(), banner.size())));
    int frames = 0;
    bench.board.instead = [&](std::uint8_t, const Bytes&, Bytes& out) {
        // The banner once more, glued to the first answer, which is lost by it.
        if (++frames == 1) out.assign(3, std::byte{'!'});
        return false;
    };
    CHECK(bench.session().greet());
    CHECK(bench.clock.elapsed() < seconds(1.0));
}

TEST_CASE("greeting: an answer to an earlier question is not taken", "[wire]") {
    Bench bench;
    bench.board.instead = [&](std::uint8_t type, const Bytes& body, Bytes& out) {
        if (type != 0x01) return false;
        // Another nonce first: as a board that answers late.
        std::vector<std::uint8_t> late{1, 2, 3, 4, static_cast<std::uint8_t>(body[4]), 99, 7, 7, 7};
        ModelBoard::say(out, 0x81, late);
        return false;
    };
    const Outcome<Greeting> greeting = bench.session().greet();
    REQUIRE(greeting);
    CHECK(greeting->filters.size() == 2);
}

TEST_CASE("greeting: what cannot be used is refused with its reason", "[wire]") {
    Bench bench;
    std::string known, problem;
    for (const SampleFormat& format : sample_formats())
        known += (known.empty() ? "" : ", ") + std::to_string(format.wire_number) + " " + std::string(format.name);
    REQUIRE(known.starts_with("1 q15, 2 q31, 3 i16, 4 i32, 5 f32"));
    SECTION("protocol") {
        bench.board.protocol = 2;
        const Error error = refused_greeting(bench);
        CHECK(to_text(error) ==
              "fake line: the board speaks version 2 of the framed wire, this program version 1\n"
              "  build the firmware with the kit that came with this program, or use the program of its kit");
        CHECK(error.kind == ErrorKind::bench);
        return;
    }
    SECTION("page count") {
        bench.board.pages_said = 5;
        problem = "it says 5 pages, but 2 filters and 0 settings need 3";
    }
    SECTION("pages that disagree") {
        bench.board.instead = [&](std::uint8_t, const Bytes& body, Bytes&) {
            if (ModelBoard::number(body, 4, 1) == 1) bench.board.pages_said = 9;
            return false;
        };
        problem = "page 1 says that there are 9 pages, page 0 said 3";
    }
    SECTION("no credit") {
        bench.board.credit_blocks = 0;
        problem = "it grants a credit of 0 blocks; 1 to 64 are possible";
    }
    SECTION("too much credit") {
        bench.board.credit_blocks = 65;
        problem = "it grants a credit of 65 blocks; 1 to 64 are possible";
    }
    SECTION("empty blocks") {
        bench.board.max_block_samples = 0;
        problem = "its largest block has 0 samples";
    }
    SECTION("no filter") {
        bench.board.filters.clear();
        problem = "it offers no filter";
    }
    SECTION("serial number that is no text") {
        bench.board.serial = "\xFF\xFE";
        problem = "the serial number is not UTF-8 text";
    }
    SECTION("name that is no text") {
        bench.board.filters[1].name = "a\x1B[2J";
        problem = "the name of filter 1 is not UTF-8 text";
    }
    SECTION("no name") {
        bench.board.filters[0].name = "";
        problem = "filter 0 has no name";
    }
    SECTION("two of a name") {
        bench.board.filters[1].name = "pass";
        problem = "two filters are named \"pass\"";
    }
    SECTION("format") {
        bench.board.filters[1].output = 31;
        problem = "filter 1 (\"sum\"): output format 31 is unknown; known are " + known;
    }
    SECTION("format number 0, whatever the layout") {
        bench.board.filters[0].input = 0x80;
        problem = "filter 0 (\"pass\"): input format 0 is unknown; known are " + known;
    }
    SECTION("a layout that the format cannot have") {
        bench.board.filters[0].input = 0x21;
        problem = "filter 0 (\"pass\"): input format 0x21: q15 has no layout 0x20";
    }
    SECTION("a layout that nobody has") {
        bench.board.filters[0].output = 0xE3;
        problem = "filter 0 (\"pass\"): output format 0xE3: i16 has no layout 0xE0";
    }
    SECTION("injection") {
        bench.board.filters[0].injection = 3;
        problem = "filter 0 (\"pass\"): injection 3 is unknown";
    }
    SECTION("channels") {
        bench.board.filters[0].channels_out = 0;
        problem = "filter 0 (\"pass\"): a filter has at least one channel";
    }
    SECTION("setting outside its range") {
        bench.board.settings.push_back({"gain", 0, 10, 11});
        problem = "setting 0 (\"gain\"): value 11 is not within 0 to 10";
    }
    SECTION("a page that is cut") {
        bench.board.instead = [&](std::uint8_t, const Bytes& body, Bytes& out) {
            if (ModelBoard::number(body, 4, 1) != 1) return false;
            std::vector<std::uint8_t> answer;
            ModelBoard::put(answer, ModelBoard::number(body, 0, 4), 4);
            for (const int byte : {1, 3, 4, 0x70, 0x61}) answer.push_back(static_cast<std::uint8_t>(byte));
            ModelBoard::say(out, 0x81, answer);
            return true;
        };
        problem = "the page of filter 0 has the wrong length";
    }
    const Error error = refused_greeting(bench);
    CHECK(to_text(error) ==
          "fake line: " + prefix + problem + "\n  correct the firmware; docs/wire.md 2.1 says what a greeting holds");
    CHECK(error.kind == ErrorKind::bench);
}

TEST_CASE("greeting: clean UTF-8 only", "[wire]") {
    for (const char* good : {"", "CW-7", "Dämpfung", "µ", "€", "\xF0\x9F\x98\x80"}) CHECK(is_clean_utf8(good));
    for (const char* bad : {"\n", "\x7F", "\xC2\x85", "\x80", "\xC0\xAF", "\xE0\x80\x80", "\xED\xA0\x80",
                            "\xF4\x90\x80\x80", "\xF5\x80\x80\x80", "\xE2\x82", "\xC3"}) {
        INFO(bad);
        CHECK_FALSE(is_clean_utf8(bad));
    }
}
