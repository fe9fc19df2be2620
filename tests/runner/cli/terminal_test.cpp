#include "runner/cli/terminal.hpp"

#include <fcntl.h>
#include <sys/wait.h>
#include <unistd.h>

#include <array>
#include <catch2/catch.hpp>
#include <csignal>

#include "tests/runner/cli/fake_terminal.hpp"

using namespace halflsb;

namespace {

FakeTerminal usual() {
    FakeTerminal terminal;
    terminal.out_is_terminal = terminal.err_is_terminal = true;
    terminal.variables = {{"TERM", "xterm-256color"}, {"LANG", "de_DE.UTF-8"}};
    return terminal;
}

/// Standard output is another descriptor while it lives.
class OutputTo {
public:
    explicit OutputTo(int descriptor) : before_(::dup(STDOUT_FILENO)) { ::dup2(descriptor, STDOUT_FILENO); }
    ~OutputTo() {
        ::dup2(before_, STDOUT_FILENO);
        ::close(before_);
    }
    OutputTo(const OutputTo&) = delete;
    OutputTo& operator=(const OutputTo&) = delete;

private:
    int before_;
};

}  // namespace

TEST_CASE("colour: on a terminal, unless NO_COLOR, TERM or --color say otherwise", "[cli]") {
    FakeTerminal terminal = usual();
    CHECK(wants_colour(terminal, Stream::out, ColourWish::automatic));
    CHECK_FALSE(wants_colour(terminal, Stream::out, ColourWish::never));
    terminal.variables["NO_COLOR"] = "";
    CHECK(wants_colour(terminal, Stream::out, ColourWish::automatic));
    terminal.variables["NO_COLOR"] = "1";
    CHECK_FALSE(wants_colour(terminal, Stream::out, ColourWish::automatic));
    CHECK(wants_colour(terminal, Stream::out, ColourWish::always));
    terminal = usual();
    terminal.variables["TERM"] = "dumb";
    CHECK_FALSE(wants_colour(terminal, Stream::out, ColourWish::automatic));
    terminal.variables.erase("TERM");
    CHECK_FALSE(wants_colour(terminal, Stream::out, ColourWish::automatic));
}

TEST_CASE("colour: each stream decides for itself", "[cli]") {
    FakeTerminal terminal = usual();
    terminal.out_is_terminal = false;
    CHECK_FALSE(wants_colour(terminal, Stream::out, ColourWish::automatic));
    CHECK(wants_colour(terminal, Stream::err, ColourWish::automatic));
    CHECK(wants_colour(terminal, Stream::out, ColourWish::always));
}

TEST_CASE("width: COLUMNS, then the terminal, then 80, never below 40", "[cli]") {
    FakeTerminal terminal = usual();
    CHECK(columns_for(terminal, Stream::out) == 80);
    terminal.columns = 132;
    CHECK(columns_for(terminal, Stream::out) == 132);
    terminal.variables["COLUMNS"] = "100";
    CHECK(columns_for(terminal, Stream::out) == 100);
    for (const char* nonsense : {"", "wide", "-3", "0", "12x", "99999999999999999999"}) {
        terminal.variables["COLUMNS"] = nonsense;
        CHECK(columns_for(terminal, Stream::out) == 132);
    }
    terminal.variables["COLUMNS"] = "39";
    CHECK(columns_for(terminal, Stream::out) == 40);
    terminal.variables["COLUMNS"] = "100000";
    CHECK(columns_for(terminal, Stream::out) == 1000);
}

TEST_CASE("unicode: the first locale variable that says anything decides", "[cli]") {
    FakeTerminal terminal;
    CHECK_FALSE(shows_unicode(terminal));
    terminal.variables["LANG"] = "en_GB.UTF-8";
    CHECK(shows_unicode(terminal));
    terminal.variables["LC_CTYPE"] = "C";
    CHECK_FALSE(shows_unicode(terminal));
    terminal.variables["LC_ALL"] = "C.utf8";
    CHECK(shows_unicode(terminal));
    terminal.variables["LC_ALL"] = "";
    CHECK_FALSE(shows_unicode(terminal));
}

TEST_CASE("terminal: a reader that closed the pipe ends the output quietly", "[cli]") {
    std::array<int, 2> pipe{};
    REQUIRE(::pipe(pipe.data()) == 0);
    ::close(pipe[0]);
    SystemTerminal terminal;
    Outcome<void> first, second;
    {
        const OutputTo broken(pipe[1]);
        first = terminal.write(Stream::out, "nobody reads this");
        second = terminal.write(Stream::out, "nor this");
    }
    ::close(pipe[1]);
    CHECK(first);
    CHECK(second);
}

TEST_CASE("terminal: SIGPIPE is as it was afterwards", "[cli]") {
    const auto before = std::signal(SIGPIPE, SIG_DFL);
    { const SystemTerminal terminal; }
    CHECK(std::signal(SIGPIPE, before) == SIG_DFL);
}

TEST_CASE("terminal: a full disk behind a redirection is an output error", "[cli]") {
    const int full = ::open("/dev/full", O_WRONLY | O_CLOEXEC);
    REQUIRE(full >= 0);
    SystemTerminal terminal;
    Outcome<void> outcome;
    {
        const OutputTo disk(full);
        outcome = terminal.write(Stream::out, "a line\n");
    }
    ::close(full);
    REQUIRE_FALSE(outcome);
    CHECK(outcome.error().kind == ErrorKind::output);
    CHECK(to_text(outcome.error()) ==
          "standard output: cannot be written: No space left on device\n"
          "  the finished cases are in the run folder; free some space or redirect elsewhere");
}

TEST_CASE("terminal: all bytes arrive through a pipe, also one that does not block", "[cli]") {
    std::array<int, 2> pipe{};
    REQUIRE(::pipe2(pipe.data(), O_NONBLOCK | O_CLOEXEC) == 0);
    const std::string text(200000, 'x');  // more than a pipe holds
    SystemTerminal terminal;
    std::size_t received = 0;
    const pid_t child = ::fork();
    REQUIRE(child >= 0);
    if (child == 0) {
        ::dup2(pipe[1], STDOUT_FILENO);
        ::close(pipe[0]);
        const bool written = static_cast<bool>(terminal.write(Stream::out, text));
        ::_exit(written ? 0 : 1);
    }
    ::close(pipe[1]);
    ::fcntl(pipe[0], F_SETFL, 0);
    std::array<char, 4096> piece;
    for (ssize_t got; (got = ::read(pipe[0], piece.data(), piece.size())) > 0;)
        received += static_cast<std::size_t>(got);
    ::close(pipe[0]);
    CHECK(received == text.size());
    int status = -1;
    REQUIRE(::waitpid(child, &status, 0) == child);
    CHECK(status == 0);
}
