// The serial link over real pseudo-terminals. Waits have deadlines that only a failure reaches.
#include "runner/link/serial.hpp"

#include <fcntl.h>
#include <grp.h>
#include <sys/file.h>
#include <sys/ioctl.h>
#include <sys/sysmacros.h>
#include <sys/wait.h>
#include <termios.h>

#include <catch2/catch.hpp>
#include <csignal>
#include <cstring>
#include <filesystem>
#include <fstream>
#include <random>

#include "runner/link/ports.hpp"
#include "runner/world/interrupt.hpp"
#include "tests/support/pty_pair.hpp"

using namespace halflsb;
using namespace halflsb::test;
using Bytes = std::vector<std::byte>;

namespace {

const SystemClock system_clock;
const Duration patience = seconds(10.0);

std::unique_ptr<Link> opened(const std::string& port, long baud = 115200) {
    Outcome<std::unique_ptr<Link>> link = open_serial({port, baud}, system_clock);
    if (!link) FAIL(to_text(link.error()));
    return std::move(link).value();
}

Error refused(const std::string& port, long baud = 115200) {
    const Outcome<std::unique_ptr<Link>> link = open_serial({port, baud}, system_clock);
    if (link) FAIL("the port was opened");
    return link.error();
}

Instant from_now(Duration duration) { return system_clock.now() + duration; }

/// A folder that goes with the test.
class Folder {
public:
    Folder() {
        char name[] = "/tmp/halflsb-link-XXXXXX";
        REQUIRE(mkdtemp(name) != nullptr);
        path_ = name;
    }
    Folder(const Folder&) = delete;
    Folder& operator=(const Folder&) = delete;
    ~Folder() { std::filesystem::remove_all(path_); }
    std::string operator/(const std::string& name) const { return (path_ / name).string(); }

private:
    std::filesystem::path path_;
};

/// Somebody without special rights, when the tests run as root.
class OrdinaryUser {
public:
    OrdinaryUser() : was_root_(geteuid() == 0) {
        if (was_root_) REQUIRE(seteuid(65534) == 0);
    }
    OrdinaryUser(const OrdinaryUser&) = delete;
    OrdinaryUser& operator=(const OrdinaryUser&) = delete;
    ~OrdinaryUser() {
        if (was_root_ && seteuid(0) != 0) std::abort();
    }

private:
    bool was_root_;
};

std::string own_name() {
    std::ifstream file("/proc/self/comm");
    std::string name;
    std::getline(file, name);
    return name + " (process " + std::to_string(getpid()) + ")";
}

}  // namespace

TEST_CASE("serial: all 256 byte values pass unchanged, both ways at once", "[link]") {
    PtyPair board;
    const std::unique_ptr<Link> link = opened(board.path(), 921600);
    CHECK(link->baud() == 921600);
    CHECK(link->name() == board.path() + " at 921600 baud");
    Bytes all;
    for (int round = 0; round < 40; ++round)
        for (int value = 0; value < 256; ++value) all.push_back(static_cast<std::byte>(value ^ round));
    Bytes at_board, at_host;
    std::size_t from_board = 0, from_host = 0;
    const Instant deadline = from_now(patience);
    Bytes buffer(1000);
    while ((at_board.size() < all.size() || at_host.size() < all.size()) && system_clock.now() < deadline) {
        if (from_board < all.size()) {
            const std::size_t count = std::min<std::size_t>(512, all.size() - from_board);
            board.write(std::span(all).subspan(from_board, count));
            from_board += count;
        }
        const Outcome<Link::Moved> moved =
            link->exchange(std::span(all).subspan(from_host), buffer, from_now(seconds(1.0)));
        REQUIRE(moved);
        from_host += moved->written;
        at_host.insert(at_host.end(), buffer.begin(), buffer.begin() + static_cast<std::ptrdiff_t>(moved->read));
        const Bytes came = board.read(0);
        at_board.insert(at_board.end(), came.begin(), came.end());
    }
    CHECK(at_board == all);
    CHECK(at_host == all);
}

TEST_CASE("serial: an exchange ends at its deadline with nothing moved", "[link]") {
    PtyPair board;
    const std::unique_ptr<Link> link = opened(board.path());
    Bytes buffer(16);
    const Instant begin = system_clock.now();
    const Outcome<Link::Moved> moved = link->exchange({}, buffer, begin + seconds(0.05));
    REQUIRE(moved);
    CHECK(moved->read == 0);
    CHECK(moved->written == 0);
    CHECK(system_clock.now() >= begin + seconds(0.05));
    CHECK(system_clock.now() < begin + patience);

    SECTION("a deadline in the past still moves what is there") {
        board.write(Bytes(5, std::byte{0x0A}));
        Outcome<Link::Moved> now = link->exchange({}, buffer, begin);
        // The kernel may take a moment to hand bytes over.
        while (now && now->read == 0 && system_clock.now() < begin + patience) now = link->exchange({}, buffer, begin);
        REQUIRE(now);
        CHECK(now->read == 5);
    }
    SECTION("a wait that ended leaves nothing behind that ends the next one") {
        for (int k = 0; k < 20; ++k) REQUIRE(link->exchange({}, buffer, from_now(seconds(0.001))));
        const Instant again = system_clock.now();
        REQUIRE(link->exchange({}, buffer, again + seconds(0.02)));
        CHECK(system_clock.now() >= again + seconds(0.02));
    }
    SECTION("no deadline at all is no overflow") {
        board.write(Bytes(1, std::byte{0}));
        const Outcome<Link::Moved> forever = link->exchange({}, buffer, Instant::max());
        REQUIRE(forever);
        CHECK(forever->read == 1);
    }
}

TEST_CASE("serial: a wait ends as soon as bytes come or the line takes some", "[link]") {
    PtyPair board;
    const std::unique_ptr<Link> link = opened(board.path());
    Bytes buffer(16);
    SECTION("bytes come while it waits") {
        const pid_t sender = fork();
        if (sender == 0) {
            const ssize_t ignored = ::write(board.master(), "x", 1);
            _exit(ignored == 1 ? 0 : 1);
        }
        const Outcome<Link::Moved> moved = link->exchange({}, buffer, from_now(patience));
        REQUIRE(moved);
        CHECK(moved->read == 1);
        CHECK(buffer[0] == std::byte{'x'});
        waitpid(sender, nullptr, 0);
    }
    SECTION("a full line takes nothing, then what was read away makes room") {
        const Bytes much(1 << 16, std::byte{0x55});
        std::size_t written = 0;
        for (;;) {
            const Outcome<Link::Moved> moved = link->exchange(much, {}, from_now(seconds(0.02)));
            REQUIRE(moved);
            if (moved->written == 0) break;
            written += moved->written;
        }
        CHECK(written > 0);
        std::size_t came = 0;
        while (came < written) {
            const Bytes part = board.read(1000);
            REQUIRE_FALSE(part.empty());
            came += part.size();
        }
        const Outcome<Link::Moved> moved = link->exchange(much, buffer, from_now(patience));
        REQUIRE(moved);
        CHECK(moved->written > 0);
    }
}

TEST_CASE("serial: what came before the port was opened is discarded", "[link]") {
    PtyPair board;
    {
        // Raw first, or the line discipline would wait for the end of a line.
        const std::unique_ptr<Link> before = opened(board.path());
        board.write(Bytes(100, std::byte{0x31}));
    }
    const std::unique_ptr<Link> link = opened(board.path());
    board.write(Bytes(1, std::byte{0x32}));
    Bytes buffer(200);
    const Outcome<Link::Moved> moved = link->exchange({}, buffer, from_now(patience));
    REQUIRE(moved);
    CHECK(moved->read == 1);
    CHECK(buffer[0] == std::byte{0x32});
}

TEST_CASE("serial: an unplug is told at once, in whatever the link is doing", "[link]") {
    PtyPair board;
    const std::unique_ptr<Link> link = opened(board.path());
    Bytes buffer(16);
    const Bytes word(4, std::byte{1});
    std::string call = "read: end of file";
    Outcome<Link::Moved> moved = Link::Moved{};
    SECTION("before a read") {
        board.unplug();
        moved = link->exchange({}, buffer, from_now(patience));
    }
    SECTION("before a write") {
        board.unplug();
        moved = link->exchange(word, {}, from_now(patience));
        call = std::string("write: ") + std::strerror(EIO);
    }
    SECTION("during a wait") {
        const pid_t holder = fork();
        if (holder == 0) {
            // The child holds the last copy of the other side, and ends when the parent waits.
            usleep(30'000);
            _exit(0);
        }
        board.unplug();
        moved = link->exchange({}, buffer, from_now(patience));
        waitpid(holder, nullptr, 0);
    }
    REQUIRE_FALSE(moved);
    CHECK(moved.error().kind == ErrorKind::bench);
    CHECK(to_text(moved.error()) == link->name() +
                                        ": the port is gone: it was unplugged, or the other side closed it (" + call +
                                        ")\n  check the cable and the power of the board, then run again");
}

TEST_CASE("serial: a second user is kept out and told who the first one is", "[link]") {
    PtyPair board;
    const std::unique_ptr<Link> first = opened(board.path());
    const Error error = refused(board.path());
    CHECK(error.kind == ErrorKind::bench);
    CHECK(to_text(error) ==
          board.path() + ": the port is busy: " + own_name() + " uses it\n  wait until it has finished, or stop it");
    // The first one does not notice.
    board.write(Bytes(3, std::byte{0x0D}));
    Bytes buffer(16);
    const Outcome<Link::Moved> moved = first->exchange({}, buffer, from_now(patience));
    REQUIRE(moved);
    CHECK(moved->read == 3);
}

TEST_CASE("serial: the port is free again when the link is gone", "[link]") {
    PtyPair board;
    for (int k = 0; k < 3; ++k) opened(board.path());
}

TEST_CASE("serial: a program that takes no lock keeps an ordinary user out too", "[link]") {
    PtyPair board;
    const int other = open(board.path().c_str(), O_RDWR | O_NOCTTY | O_CLOEXEC);
    REQUIRE(other >= 0);
    REQUIRE(ioctl(other, TIOCEXCL) == 0);
    REQUIRE(chmod(board.path().c_str(), 0666) == 0);
    {
        const OrdinaryUser user;
        const Error error = refused(board.path());
        // An ordinary user cannot see whose it is when it is root's.
        CHECK(error.problem.rfind("the port is busy: ", 0) == 0);
        CHECK(error.remedy == "wait until it has finished, or stop it");
    }
    close(other);
}

TEST_CASE("serial: without permission the group is named", "[link]") {
    struct stat status {};
    const group* dialout = getgrnam("dialout");
    REQUIRE(dialout != nullptr);
    status.st_gid = dialout->gr_gid;
    status.st_mode = S_IFCHR | 0660;
    const Error error = no_permission("/dev/ttyUSB0", status);
    CHECK(error.kind == ErrorKind::bench);
    CHECK(to_text(error) ==
          "/dev/ttyUSB0: no permission to open it; it belongs to the group \"dialout\"\n"
          "  join that group and log in again: sudo usermod -aG dialout $USER");
    status.st_mode = S_IFCHR | 0600;
    CHECK(
        to_text(no_permission("/dev/ttyUSB0", status)) ==
        "/dev/ttyUSB0: no permission to open it; it belongs to the group \"dialout\", which has no right to it either\n"
        "  ask the administrator for a udev rule that gives it to a group such as dialout");

    SECTION("for a device that really refuses") {
        PtyPair board;
        REQUIRE(chmod(board.path().c_str(), 0) == 0);
        const OrdinaryUser user;
        CHECK(refused(board.path()).problem.rfind("no permission to open it; it belongs to the group \"", 0) == 0);
    }
}

TEST_CASE("serial: a port that is not there lists those that are", "[link]") {
    const Outcome<std::vector<PortInfo>> ports = list_ports();
    REQUIRE(ports);
    for (const char* name : {"/dev/ttyUSB_none", "/dev/null/x", "usb:dead:beef"}) {
        const Error error = refused(name);
        CHECK(error.kind == ErrorKind::bench);
        CHECK(to_text(error) == to_text(no_such_port(name, *ports)));
    }
}

TEST_CASE("serial: a link to a pseudo-terminal is followed and named", "[link]") {
    const Folder folder;
    PtyPair board;
    const std::string path = folder / "board";
    std::filesystem::create_symlink(board.path(), path);
    const std::unique_ptr<Link> link = opened(path, 250000);
    CHECK(link->name() == path + " (" + board.path() + ") at 250000 baud");
    board.write(Bytes(2, std::byte{0x0A}));
    Bytes buffer(16);
    const Outcome<Link::Moved> moved = link->exchange({}, buffer, from_now(patience));
    REQUIRE(moved);
    CHECK(moved->read == 2);

    SECTION("one that leads nowhere says so") {
        const std::string broken = folder / "gone";
        std::filesystem::create_symlink(folder / "nothing", broken);
        CHECK(to_text(refused(broken)) == broken +
                                              ": no such port: the link leads to a device that is gone\n"
                                              "  start the emulated board first, or plug the board in");
    }
}

TEST_CASE("serial: what is no terminal is refused", "[link]") {
    const Folder folder;
    const std::string file = folder / "file";
    std::ofstream(file) << "text";
    for (const std::string& path : {file, folder / ".", std::string("/dev/null")}) {
        const Error error = refused(path);
        CHECK(error.kind == ErrorKind::bench);
        CHECK(to_text(error) == path +
                                    ": this is not a serial port: it is no terminal device\n"
                                    "  port in the rig names a device such as /dev/ttyUSB0, or a stable name; "
                                    "halflsb ports lists them");
    }
    std::ifstream check(file);
    std::string text;
    std::getline(check, text);
    CHECK(text == "text");
}

TEST_CASE("serial: rates that are none are an input error", "[link]") {
    PtyPair board;
    for (const long baud : {0L, -9600L, 3'000'000'000L}) {
        const Error error = refused(board.path(), baud);
        CHECK(error.kind == ErrorKind::input);
        CHECK(to_text(error) == board.path() + ": baud " + std::to_string(baud) +
                                    " is no line rate\n  write the rate that the firmware sets, such as 115200");
    }
}

TEST_CASE("serial: an interrupt ends a wait at once", "[link]") {
    // In a child: signals belong to the whole process.
    PtyPair board;
    const pid_t child = fork();
    if (child == 0) {
        if (!watch_for_interrupts()) _exit(1);
        Outcome<std::unique_ptr<Link>> link = open_serial({board.path(), 115200}, system_clock);
        if (!link) _exit(2);
        Bytes buffer(16);
        // A wait before, so that watching is armed more than once.
        if (!(*link)->exchange({}, buffer, from_now(seconds(0.001)))) _exit(3);
        const pid_t waiting = getpid();
        const pid_t sender = fork();
        if (sender == 0) {
            usleep(20'000);
            kill(waiting, SIGINT);
            _exit(0);
        }
        const Instant begin = system_clock.now();
        const Outcome<Link::Moved> moved = (*link)->exchange({}, buffer, from_now(seconds(60.0)));
        if (moved || moved.error().kind != ErrorKind::interrupted) _exit(4);
        if (system_clock.now() - begin > patience) _exit(5);
        // Asked again, it says the same without a wait.
        const Outcome<Link::Moved> again = (*link)->exchange(buffer, buffer, from_now(seconds(60.0)));
        _exit(!again && again.error().kind == ErrorKind::interrupted ? 0 : 6);
    }
    int status = 0;
    REQUIRE(waitpid(child, &status, 0) == child);
    CHECK(WIFEXITED(status));
    CHECK(WEXITSTATUS(status) == 0);
}
