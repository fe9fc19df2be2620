#include "runner/cli/diagnostics.hpp"

#include <spdlog/spdlog.h>
#include <unistd.h>

#include <catch2/catch.hpp>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <regex>

#include "tests/runner/cli/fake_terminal.hpp"

using namespace halflsb;

namespace {

std::string scratch_file() {
    return (std::filesystem::temp_directory_path() / ("halflsb-log-" + std::to_string(::getpid()))).string();
}

std::string content(const std::string& path) {
    std::ifstream file(path, std::ios::binary);
    return {std::istreambuf_iterator<char>(file), {}};
}

void say_one_of_each() {
    spdlog::trace("a trace");
    spdlog::debug("a detail");
    spdlog::info("a note");
    spdlog::warn("a warning");
    spdlog::error("an error");
}

}  // namespace

TEST_CASE("diagnostics: usually only warnings, plain, on standard error", "[cli]") {
    FakeTerminal terminal;
    {
        const auto diagnostics = Diagnostics::start(terminal, false, std::nullopt);
        REQUIRE(diagnostics);
        say_one_of_each();
    }
    CHECK(terminal.err == "a warning\nan error\n");
    CHECK(terminal.out.empty());
}

TEST_CASE("diagnostics: -v adds details with the time of day", "[cli]") {
    FakeTerminal terminal;
    {
        const auto diagnostics = Diagnostics::start(terminal, true, std::nullopt);
        REQUIRE(diagnostics);
        say_one_of_each();
    }
    const std::string time = "[0-9]{2}:[0-9]{2}:[0-9]{2}\\.[0-9]{3} ";
    INFO(terminal.err);
    CHECK(std::regex_match(terminal.err, std::regex(time + "a detail\n" + time + "a note\n" + time + "a warning\n" +
                                                    time + "an error\n")));
}

TEST_CASE("diagnostics: the log file keeps everything, line by line, and replaces an older one", "[cli]") {
    const std::string path = scratch_file();
    std::ofstream(path) << "old";
    FakeTerminal terminal;
    {
        const auto diagnostics = Diagnostics::start(terminal, false, path);
        REQUIRE(diagnostics);
        spdlog::trace("a trace");
        // Already on the disk: a crash loses nothing.
        CHECK(content(path).find(" trace a trace\n") != std::string::npos);
        spdlog::warn("a warning");
    }
    const std::string time = "[0-9]{4}-[0-9]{2}-[0-9]{2}T[0-9]{2}:[0-9]{2}:[0-9]{2}\\.[0-9]{3}Z ";
    INFO(content(path));
    CHECK(std::regex_match(content(path), std::regex(time + "trace a trace\n" + time + "warning a warning\n")));
    CHECK(terminal.err == "a warning\n");
    std::filesystem::remove(path);
}

TEST_CASE("diagnostics: what a board says cannot write escape sequences", "[cli]") {
    FakeTerminal terminal;
    const auto diagnostics = Diagnostics::start(terminal, false, std::nullopt);
    REQUIRE(diagnostics);
    spdlog::warn("the board says '\x1b[2J\xff'");
    CHECK(terminal.err == "the board says '\\x1b[2J\\xff'\n");
}

TEST_CASE("diagnostics: a log file that cannot be opened is an output error", "[cli]") {
    FakeTerminal terminal;
    const auto diagnostics = Diagnostics::start(terminal, false, "/nowhere/at/all.log");
    REQUIRE_FALSE(diagnostics);
    CHECK(diagnostics.error().kind == ErrorKind::output);
    CHECK(to_text(diagnostics.error()) ==
          "/nowhere/at/all.log: the log file cannot be opened: No such file or directory\n"
          "  choose another file with --log");
}

TEST_CASE("diagnostics: a disk that fills up is told once, and nothing else suffers", "[cli]") {
    FakeTerminal terminal;
    const auto diagnostics = Diagnostics::start(terminal, false, "/dev/full");
    REQUIRE(diagnostics);
    spdlog::info("one");
    spdlog::info("two");
    CHECK(terminal.err == "/dev/full: the log cannot be continued: No space left on device\n");
}

TEST_CASE("diagnostics: afterwards they go nowhere", "[cli]") {
    FakeTerminal terminal;
    { REQUIRE(Diagnostics::start(terminal, true, std::nullopt)); }
    spdlog::error("too late");
    CHECK(terminal.err.empty());
    CHECK(terminal.out.empty());
}
