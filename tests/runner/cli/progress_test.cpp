#include "runner/cli/progress.hpp"

#include <catch2/catch.hpp>

#include "runner/world/printable.hpp"
#include "tests/runner/cli/fake_terminal.hpp"

using namespace halflsb;

namespace {

Progress at(std::int64_t done, double elapsed_s) { return {3, 8, "mains hum, half scale", done, 1000, elapsed_s}; }

FakeTerminal a_terminal() {
    FakeTerminal terminal;
    terminal.err_is_terminal = true;
    terminal.columns = 60;
    terminal.variables = {{"TERM", "xterm"}, {"LANG", "C.UTF-8"}};
    return terminal;
}

}  // namespace

TEST_CASE("progress: place, name, part done, time left", "[cli]") {
    CHECK(progress_text(at(420, 8.0), 79, true) == "3/8 mains hum, half scale  42 %  11 s left");
    CHECK(progress_text(at(420, 0.9), 79, true) == "3/8 mains hum, half scale  42 %");
    CHECK(progress_text(at(0, 8.0), 79, true) == "3/8 mains hum, half scale  0 %");
    CHECK(progress_text(at(999, 8.0), 79, true) == "3/8 mains hum, half scale  99 %  0 s left");
    CHECK(progress_text(at(1000, 8.0), 79, true) == "3/8 mains hum, half scale  100 %  0 s left");
    CHECK(progress_text(at(10, 2.0), 79, true) == "3/8 mains hum, half scale  1 %  3 min 18 s left");
    CHECK(progress_text(at(1, 10.0), 79, true) == "3/8 mains hum, half scale  0 %  2 h 46 min left");
}

TEST_CASE("progress: numbers that make no sense do no harm", "[cli]") {
    CHECK(progress_text({1, 1, "x", 5, 0, 3.0}, 79, true) == "1/1 x");
    CHECK(progress_text({1, 1, "x", 7, 5, 3.0}, 79, true) == "1/1 x  100 %  0 s left");
    CHECK(progress_text({1, 1, "x", -7, 5, 3.0}, 79, true) == "1/1 x  0 %");
}

TEST_CASE("progress: never wider than asked, the name gives way first", "[cli]") {
    CHECK(progress_text(at(420, 8.0), 35, true) == "3/8 mains hum, ha…  42 %  11 s left");
    CHECK(progress_text(at(420, 8.0), 35, false) == "3/8 mains hum, ...  42 %  11 s left");
    CHECK(progress_text(at(420, 8.0), 17, true) == "3/8   42 %  11 s ");
    for (int columns = 1; columns < 60; ++columns) {
        CHECK(columns_of(progress_text(at(420, 8.0), columns, true)) <= static_cast<std::size_t>(columns));
    }
    CHECK(progress_text({1, 1, "x\x1b[2J", 1, 2, 0.0}, 79, true) == "1/1 x\\x1b[2J  50 %");
}

TEST_CASE("live line: drawn at most ten times a second, over itself, and taken away", "[cli]") {
    FakeTerminal terminal = a_terminal();
    HandClock clock;
    {
        LiveLine line(terminal, clock);
        line.update(at(10, 0.4));  // too early: most cases are over by then
        CHECK(terminal.err.empty());
        line.update(at(100, 0.5));
        CHECK(terminal.err == "\r\x1b[2K3/8 mains hum, half scale  10 %");
        clock.advance(0.099);
        line.update(at(110, 0.6));
        CHECK(terminal.writes == 1);
        clock.advance(0.001);
        line.update(at(120, 0.6));
        CHECK(terminal.writes == 2);
        line.erase();
        CHECK(terminal.err.substr(terminal.err.size() - 5) == "\r\x1b[2K");
        line.erase();
        CHECK(terminal.writes == 3);
        clock.advance(1.0);
        line.update(at(500, 2.0));
    }
    CHECK(terminal.writes == 5);  // drawn once more, erased at the end
    CHECK(terminal.out.empty());
}

TEST_CASE("live line: nothing off a terminal, on a dumb one, or when it is not wanted", "[cli]") {
    HandClock clock;
    FakeTerminal pipe = a_terminal(), dumb = a_terminal(), unwanted = a_terminal();
    pipe.err_is_terminal = false;
    pipe.out_is_terminal = true;
    dumb.variables["TERM"] = "dumb";
    for (FakeTerminal* terminal : {&pipe, &dumb}) {
        LiveLine(*terminal, clock).update(at(500, 2.0));
        CHECK(terminal->writes == 0);
    }
    LiveLine(unwanted, clock, false).update(at(500, 2.0));
    CHECK(unwanted.writes == 0);
}

TEST_CASE("live line: leaves one column free, since terminals wrap after the last", "[cli]") {
    FakeTerminal terminal = a_terminal();
    terminal.columns = 42;  // the text is 42 columns wide
    HandClock clock;
    LiveLine line(terminal, clock);
    line.update(at(420, 8.0));
    CHECK(terminal.err == "\r\x1b[2K3/8 mains hum, half sca…  42 %  11 s left");
}

TEST_CASE("live line: given up when it cannot be drawn", "[cli]") {
    FakeTerminal terminal = a_terminal();
    terminal.full = true;
    HandClock clock;
    LiveLine line(terminal, clock);
    line.update(at(420, 8.0));
    clock.advance(1.0);
    line.update(at(430, 9.0));
    CHECK(terminal.writes == 1);
}
