// What a board on the wire can be blamed for.
#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "tests/diagnostics/page.hpp"
#include "tests/runner/wire/bench.hpp"

namespace halflsb::diagnostics {

namespace {

using namespace halflsb::test;

/// Who answers instead of a board.
void show_peer(Page& page, std::string_view done, Peer& peer, long baud = 0) {
    FakeClock clock;
    FakeLink link(clock, peer);
    link.set_baud(baud);
    page.show(done, make_framed_wire(link, clock, WireLimits{}, 1)->greet());
}

struct Fault {
    std::string_view done;
    std::function<void(ModelBoard&)> make;
};

void show_greetings(Page& page) {
    const auto first = [](ModelBoard& board) -> ModelBoard::Filter& { return board.filters[0]; };
    const auto answers_page = [](ModelBoard& board, std::uint64_t number, std::vector<std::uint8_t> bytes) {
        board.instead = [number, bytes](std::uint8_t type, const Bytes& body, Bytes& out) {
            if (type != 0x01 || ModelBoard::number(body, 4, 1) != number) return false;
            std::vector<std::uint8_t> answer;
            ModelBoard::put(answer, ModelBoard::number(body, 0, 4), 4);
            answer.insert(answer.end(), bytes.begin(), bytes.end());
            ModelBoard::say(out, 0x81, answer);
            return true;
        };
    };
    const std::vector<Fault> faults = {
        {"another version of the wire", [](ModelBoard& b) { b.protocol = 2; }},
        {"a count of pages that cannot be", [](ModelBoard& b) { b.pages_said = 5; }},
        {"a count of pages that changes",
         [](ModelBoard& b) {
             b.instead = [&b](std::uint8_t, const Bytes& body, Bytes&) {
                 if (ModelBoard::number(body, 4, 1) == 1) b.pages_said = 9;
                 return false;
             };
         }},
        {"another page than the one asked for",
         [&](ModelBoard& b) {
             answers_page(b, 1, {2, 3});
         }},
        {"a greeting that is cut", [&](ModelBoard& b) { answers_page(b, 0, {}); }},
        {"the first page is cut",
         [&](ModelBoard& b) {
             answers_page(b, 0, {0, 3, 1});
         }},
        {"the page of a filter is cut",
         [&](ModelBoard& b) {
             answers_page(b, 1, {1, 3, 4, 0x70});
         }},
        {"the page of a setting is cut",
         [&](ModelBoard& b) {
             b.settings.push_back({"gain", 0, 10, 5});
             answers_page(b, 3, {3, 4, 4, 0x70});
         }},
        {"the page of a filter never comes",
         [](ModelBoard& b) {
             b.instead = [](std::uint8_t type, const Bytes& body, Bytes&) {
                 return type == 0x01 && ModelBoard::number(body, 4, 1) == 2;
             };
         }},
        {"no credit", [](ModelBoard& b) { b.credit_blocks = 0; }},
        {"blocks without samples", [](ModelBoard& b) { b.max_block_samples = 0; }},
        {"no filter", [](ModelBoard& b) { b.filters.clear(); }},
        {"a serial number that is no text", [](ModelBoard& b) { b.serial = "\xFF"; }},
        {"a filter without a name", [&](ModelBoard& b) { first(b).name = ""; }},
        {"a name that is no text", [&](ModelBoard& b) { first(b).name = "a\x1B[2J"; }},
        {"two filters of one name", [](ModelBoard& b) { b.filters[1].name = "pass"; }},
        {"a format that is none", [&](ModelBoard& b) { first(b).output = 31; }},
        {"a layout that the format cannot have", [&](ModelBoard& b) { first(b).input = 0x21; }},
        {"an injection that is none", [&](ModelBoard& b) { first(b).injection = 3; }},
        {"a filter without channels", [&](ModelBoard& b) { first(b).channels_out = 0; }},
        {"a setting outside its range",
         [](ModelBoard& b) {
             b.settings.push_back({"gain", 0, 10, 11});
         }},
    };
    for (const Fault& fault : faults) {
        Bench bench;
        fault.make(bench.board);
        page.show(fault.done, bench.session().greet());
    }
}

/// A board that answers the frame of that type (and that number, where it matters) in its own way.
auto answering(std::uint8_t asked, std::optional<std::uint64_t> seq, std::uint8_t type,
               std::vector<std::uint8_t> answer) {
    return [=](ModelBoard& board) {
        board.instead = [=](std::uint8_t came, const Bytes& body, Bytes& out) {
            if (came != asked || (seq && ModelBoard::number(body, 0, 2) != *seq)) return false;
            ModelBoard::say(out, type, answer);
            return true;
        };
    };
}

/// An answer that repeats the nonce of its question.
auto answering_question(std::uint8_t asked, std::uint8_t type, std::vector<std::uint8_t> rest) {
    return [=](ModelBoard& board) {
        board.instead = [=](std::uint8_t came, const Bytes& body, Bytes& out) {
            if (came != asked) return false;
            std::vector<std::uint8_t> answer;
            ModelBoard::put(answer, ModelBoard::number(body, 0, 4), 4);
            answer.insert(answer.end(), rest.begin(), rest.end());
            ModelBoard::say(out, type, answer);
            return true;
        };
    };
}

auto silent(std::uint8_t asked, std::uint64_t from_seq = 0) {
    return [=](ModelBoard& board) {
        board.instead = [=](std::uint8_t type, const Bytes& body, Bytes&) {
            return type == asked && (from_seq == 0 || ModelBoard::number(body, 0, 2) >= from_seq);
        };
    };
}

void show_streams(Page& page) {
    const std::vector<Fault> faults = {
        {"no answer to START", silent(0x02)},
        {"no answer to STATUS", silent(0x03)},
        {"an answer to START that is cut", answering_question(0x02, 0x82, {1})},
        {"an answer to STATUS that is cut", answering_question(0x03, 0x83, {1})},
        {"larger blocks than asked for", [](ModelBoard& b) { b.block_said_at_start = 257; }},
        {"no credit at the start", [](ModelBoard& b) { b.credit_said_at_start = 0; }},
        {"silence from the third block on", silent(0x10, 2)},
        {"EXPECT again and again", answering(0x10, std::nullopt, 0x92, {0, 0})},
        {"a restart in the stream",
         [](ModelBoard& b) {
             b.instead = [&b, over = false](std::uint8_t type, const Bytes& body, Bytes&) mutable {
                 if (type == 0x10 && ModelBoard::number(body, 0, 2) == 5 && !over) {
                     over = true;
                     b.restart();
                 }
                 return false;
             };
         }},
        {"a block refused as of an unknown type", answering(0x10, 1, 0xFF, {0x10, 1, 0, 1})},
        {"a block refused as not the current one", answering(0x10, 1, 0xFF, {0x10, 1, 0, 3})},
        {"a block refused for its filter", answering(0x10, 1, 0xFF, {0x10, 1, 0, 4})},
        {"a block refused for its length", answering(0x10, 1, 0xFF, {0x10, 1, 0, 5})},
        {"a block refused for a reason that we do not know", answering(0x10, 1, 0xFF, {0x10, 1, 0, 77})},
        {"too few samples come back", answering(0x10, 1, 0x90, {1, 0, 0, 0, 0, 0, 0, 0, 0, 7, 7})},
        {"no samples come back", answering(0x10, 1, 0x90, {1, 0})},
        {"DONE for a block", answering(0x10, 1, 0x91, {1, 0, 0, 0, 0, 0, 0, 0, 0, 0})},
        {"DONE that is cut", answering(0x10, 1, 0x91, {1, 0})},
    };
    for (const Fault& fault : faults) {
        Bench bench;
        fault.make(bench.board);
        const Outcome<void> opened = bench.open(1);
        if (!opened) {
            page.show(fault.done, opened);
            continue;
        }
        const Streamed streamed = stream(bench.session(), 5000, bench.clock);
        page.show(fault.done, streamed.error ? to_text(*streamed.error) : std::string());
    }
    const std::vector<Fault> resets = {
        {"a reset at another sample", answering(0x11, std::nullopt, 0x91, {0, 0, 9, 0, 0, 0, 0, 0, 0, 0})},
        {"samples for a reset", answering(0x11, std::nullopt, 0x90, std::vector<std::uint8_t>(11, 0))},
    };
    for (const Fault& fault : resets) {
        Bench bench;
        fault.make(bench.board);
        if (bench.open(1)) bench.session().send_reset();
        page.show(fault.done, bench.session().advance(bench.clock.now() + seconds(1.0)));
    }
}

/// Of callers that break the contract of the wire: defects of our own.
void show_defects(Page& page) {
    const auto broken = [&](std::string_view done, bool opens, const std::function<void(Wire&)>& act) {
        Bench bench;
        if (opens && !bench.open(1)) page.missing(done);
        act(bench.session());
        page.show(done, bench.session().advance(bench.clock.now() + seconds(1.0)));
    };
    const auto fill = [](Wire& wire) {
        while (const std::size_t room = wire.room_samples()) wire.send(std::vector<Code>(room));
    };
    broken("a stream that is not open goes on", false, [](Wire&) {});
    broken("more than the credit is sent", true, [](Wire& wire) { wire.send(std::vector<Code>(5000)); });
    broken("a reset without credit", true, [&](Wire& wire) {
        fill(wire);
        wire.send_reset();
    });
    broken("a setting that is none of the board", true, [](Wire& wire) { wire.send_setting(9, 1); });
    Bench bench;
    page.show("a stream without a greeting", bench.session().start(0));
    page.show("counters without a stream", bench.session().counters());
    page.show("a stream is settled that is not open", bench.session().settle());
}

}  // namespace

void wire_chapter(Page& page) {
    page.chapter("Who answers on the port");
    SilentPeer nobody;
    EchoPeer echo;
    TalkingPeer text("weight 12.5 g\r\n"), noise("\xF8\x80\xFF");
    show_peer(page, "nobody", nobody);
    show_peer(page, "nobody, at a baud rate", nobody, 115200);
    show_peer(page, "an echo", echo);
    show_peer(page, "a firmware that prints", text);
    show_peer(page, "bytes that are no frames", noise);
    show_peer(page, "bytes that are no frames, at a baud rate", noise, 9600);
    page.chapter("The greeting");
    show_greetings(page);
    page.chapter("The stream");
    show_streams(page);
    page.chapter("The wire, used otherwise than it is meant: defects of our own");
    show_defects(page);
}

}  // namespace halflsb::diagnostics
