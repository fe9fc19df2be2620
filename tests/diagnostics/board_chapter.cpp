// Boards that do not fit the plan, ports that are not there, commands of a rig that fail.
#include <sys/stat.h>
#include <unistd.h>

#include <filesystem>
#include <fstream>
#include <string>
#include <vector>

#include "runner/board.hpp"
#include "runner/board_settings.hpp"
#include "runner/link/ports.hpp"
#include "runner/link/serial.hpp"
#include "runner/wire/framed_wire.hpp"
#include "runner/world/clock.hpp"
#include "runner/world/command.hpp"
#include "runner/world/interrupt.hpp"
#include "tests/diagnostics/page.hpp"
#include "tests/diagnostics/served_board.hpp"
#include "tests/support/temporary_folder.hpp"

namespace halflsb::diagnostics {

namespace {

using namespace halflsb::test;

void show_filters(Page& page) {
    const SampleFormat q15 = *sample_format("q15"), i16 = *sample_format("i16");
    Greeting greeting;
    BoardFilter average;
    average.name = "average";
    average.input = average.output = q15;
    BoardFilter notch = average;
    notch.name = "notch";
    greeting.filters = {average, notch};
    Signal signal;
    signal.input = signal.output = q15;
    const auto show = [&](std::string_view done, const Signal& asked) {
        page.show(done, agreeing_filter(greeting, asked, "/dev/ttyUSB0 at 921600 baud"));
    };
    show("two filters, and the plan names none", signal);
    signal.filter = "averge";
    show("a filter that the board does not have", signal);
    signal.filter = "average";
    Signal other = signal;
    other.input = i16;
    show("another input", other);
    other = signal;
    other.output = i16;
    show("another output", other);
    other = signal;
    other.channels = 2;
    show("another count of channels", other);
}

void show_settings(Page& page) {
    Greeting greeting;
    Plan plan;
    Case the_case;
    the_case.name = "slow average";
    the_case.settings = {{"average-points", 128, {"plan.toml", 14, 1}}};
    plan.cases.push_back(std::move(the_case));
    page.show("a setting of a board that has none", BoardSettings::agreed(greeting, plan, {0}, "/dev/ttyUSB0"));
    greeting.settings = {{"gain", 0, 7, 3}, {"offset", -100, 100, 0}};
    page.show("a setting that the board does not have", BoardSettings::agreed(greeting, plan, {0}, "/dev/ttyUSB0"));
    greeting.settings.push_back({"average-points", 1, 64, 16});
    page.show("a value that the setting does not take", BoardSettings::agreed(greeting, plan, {0}, "/dev/ttyUSB0"));
}

void show_another_board(Page& page) {
    FakeClock clock;
    ModelBoard model;
    Board board;
    board.link = std::make_unique<FakeLink>(clock, model);
    board.wire = make_framed_wire(*board.link, clock, WireLimits{}, 7);
    if (auto greeting = board.wire->greet()) board.greeting = *greeting;
    model.serial = "CW7-0043";
    Rig rig;
    rig.answer_s = rig.greet_s = 1.0;
    rig.block_samples = 64;
    page.show("another board after a case was invalid", greet_again(board, rig, clock));
}

std::string own_name() {
    std::ifstream file("/proc/self/comm");
    std::string name;
    std::getline(file, name);
    return name;
}

void show_ports(Page& page) {
    const std::vector<PortInfo> ports = {{"/dev/ttyUSB0", "usb:0403:6001:A502", "adapter", 0x0403, 0x6001, "A502"},
                                         {"/dev/ttyUSB1", "usb:0403:6001:A503", "adapter", 0x0403, 0x6001, "A503"},
                                         {"/dev/ttyS0", "", "board", -1, -1, ""}};
    page.show("a stable name that is none", parse_usb_name("usb:403:6001"));
    page.show("no port at all", find_device("usb:0403:6001", {}));
    page.show("a port that is not among those seen", find_device("usb:1366:0105", ports));
    page.show("a name of two ports", find_device("usb:0403:6001", ports));
    const SystemClock clock;
    const auto open = [&](std::string_view done, const std::string& port, long baud = 115200) {
        page.show(done, open_serial({port, baud}, clock));
    };
    open("a baud rate of 0", "/dev/ttyUSB0", 0);
    open("a file instead of a port", "/etc/passwd");
    open("a device that is no port", "/dev/null");
    struct stat status {};
    status.st_mode = S_IFCHR | 0660;
    page.show("a port that only root may use", no_permission("/dev/ttyUSB0", status));
    status.st_gid = 54321;
    page.show("a port that a group may use", no_permission("/dev/ttyUSB0", status));
    TemporaryFolder folder;
    const std::string link = folder / "tty";
    std::filesystem::create_symlink("/dev/pts/no-such-terminal", link);
    const auto told = [&](const Error& error) { return replaced(to_text(error), {{link, "./tty"}}); };
    const auto dangling = open_serial({link, 115200}, clock);
    page.show("a link to a terminal that is gone", dangling ? std::string() : told(dangling.error()));
    std::filesystem::remove(link);
    PtyPair pair;
    std::filesystem::create_symlink(pair.path(), link);
    auto first = open_serial({link, 115200}, clock);
    const auto second = open_serial({link, 115200}, clock);
    const std::string number = std::to_string(getpid());
    page.show("a port that another program holds",
              second ? std::string() : replaced(told(second.error()), {{number, "4711"}, {own_name(), "terminal"}}));
    if (!first) return page.show("a port that works", first.error());
    pair.unplug();
    std::vector<std::byte> buffer(16);
    const auto gone = (*first)->exchange({}, buffer, clock.now() + seconds(5.0));
    page.show("a port that is unplugged",
              gone ? std::string() : replaced(told(gone.error()), {{pair.path(), "/dev/pts/3"}}));
}

void show_image(Page& page) {
    const ServedBoard board;
    Rig rig;
    rig.port = board.path();
    rig.baud = 921600;
    rig.block_samples = 64;
    rig.answer_s = rig.greet_s = 10.0;
    FirmwareCheck firmware;
    const auto opened = open_board(rig, Plan{}, Image{"cw7.elf", "3fa2b19c"}, SystemClock(), firmware);
    page.show("a firmware that is not the image",
              opened ? std::string() : replaced(to_text(opened.error()), {{board.path(), "/dev/pts/3"}}));
}

void show_commands(Page& page) {
    const SystemClock clock;
    const auto run = [&](std::string_view done, const std::vector<std::string>& arguments, double limit_s = 60.0) {
        page.show(done, run_command(arguments, "/", seconds(limit_s), clock));
    };
    run("a command that is not there", {"./flash-cw7.sh", "cw7.elf"});
    run("a command that fails and says why", {"/bin/sh", "-c", "echo no probe found; exit 3"});
    run("a command that fails in silence", {"/bin/sh", "-c", "exit 3"});
    run("a command that dies", {"/bin/sh", "-c", "kill -9 $$"});
    request_interrupt();
    run("a command, and the user asks to stop", {"/bin/sleep", "600"});
    forget_interrupt();
    run("a command that does not end", {"/bin/sleep", "600"}, 0.3);
}

}  // namespace

void board_chapter(Page& page) {
    page.chapter("The board and the plan");
    show_filters(page);
    show_settings(page);
    show_another_board(page);
    show_image(page);
    page.chapter("Ports");
    show_ports(page);
    page.chapter("Commands of the rig");
    show_commands(page);
}

}  // namespace halflsb::diagnostics
