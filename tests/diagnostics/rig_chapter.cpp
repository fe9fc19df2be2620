// What a rig can be refused for.
#include <string>
#include <vector>

#include "runner/config/repository.hpp"
#include "runner/config/rig_file.hpp"
#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

const std::string good_rig = R"([board]
name = "checkweigher CW-7, bench 3"
isolated = true
[link]
use = "serial"
port = "usb:0403:6001"
[wire]
form = "framed"
[commands]
before_run = [["./flash.sh", "{image}"]]
)";

const std::string commands = "[[\"./flash.sh\", \"{image}\"]]";

const std::vector<Change> changes = {
    {"nothing said of isolation", "isolated = true\n", ""},
    {"a board that is not isolated", "isolated = true", "isolated = false"},
    {"isolated in quotation marks", "isolated = true", "isolated = \"true\""},
    {"a link of a later version", "use = \"serial\"", "use = \"tcp\""},
    {"a link that is none", "use = \"serial\"", "use = \"seral\""},
    {"a wire of a later version", "form = \"framed\"", "form = \"lines\""},
    {"no port", "port = \"usb:0403:6001\"\n", ""},
    {"a name of a USB port that is none", "usb:0403:6001", "usb:0403"},
    {"a baud rate that is too low", "use = \"serial\"", "use = \"serial\"\nbaud = 100"},
    {"no [wire]", "[wire]\nform = \"framed\"\n", ""},
    {"a key that is none", "form = \"framed\"", "form = \"framed\"\nblock_sample = 64"},
    {"a key under the wrong header", "form = \"framed\"", "form = \"framed\"\nport = \"x\""},
    {"a table that is a list", "[wire]", "[[wire]]"},
    {"too many attempts", "[commands]", "[run]\nattempts = 11\n[commands]"},
    {"commands that are a string", commands, "\"./flash.sh\""},
    {"a command that is a string", commands, "[\"./flash.sh\"]"},
    {"a command without arguments", commands, "[[]]"},
    {"a command without a name", commands, "[[\"\"]]"},
    {"an argument that is a number", commands, "[[\"./flash.sh\", 3]]"},
    {"an argument with a NUL", commands, "[[\"./flash.sh\", \"a\\u0000b\"]]"},
    {"an argument that nothing replaces", commands, "[[\"./flash.sh\", \"{port}\"]]"},
};

void show_rig(Page& page, std::string_view done, const std::string& text) {
    FakeFiles files;
    files.contents["lab/bench.toml"] = text;
    const auto read = read_rig("lab/bench.toml", files);
    std::string told;
    if (const auto* problems = std::get_if<ReadProblems>(&read)) {
        for (const std::string& problem : problems->texts) told += problem + (problem.ends_with('\n') ? "" : "\n");
    }
    page.show(done, told);
}

}  // namespace

void rig_chapter(Page& page) {
    page.chapter("The rig");
    FakeFiles none;
    const auto missing = read_rig("lab/bench.toml", none);
    page.show("no rig there", std::get<ReadProblems>(missing).texts.front());
    show_rig(page, "an empty file", "");
    for (const Change& change : changes) show_rig(page, change.done, spoilt(good_rig, change.from, change.to));
    FakeFiles files;
    files.contents = {{"/work/cw7/plan.toml", ""}, {"/work/cw7/bench.toml", ""}};
    files.folders = {"/work/cw7/.git"};
    page.show("a rig in the repository of the plan",
              rig_in_repository_warning("/work/cw7/bench.toml", "/work/cw7/plan.toml", files).value_or(""));
}

}  // namespace halflsb::diagnostics
