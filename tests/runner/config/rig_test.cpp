#include <set>

#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

void refused(const std::string& from, const std::string& to, int line, const std::string& at,
             const std::string& problem, const std::string& remedy) {
    const std::string text = with(good_rig, from, to);
    CHECK(rig_problems(text) == message(text, line, at, problem, remedy, "lab/rig.toml"));
}

void refused_addition(const std::string& line, const std::string& at, const std::string& problem,
                      const std::string& remedy) {
    const std::string text = good_rig + "[commands]\n" + line + "\n";
    CHECK(rig_problems(text) == message(text, 10, at, problem, remedy, "lab/rig.toml"));
}

}  // namespace

TEST_CASE("rig: a good one is read with its defaults", "[config]") {
    const Rig rig = rig_of(good_rig);
    CHECK(rig.file == "lab/rig.toml");
    CHECK(rig.folder == "lab");
    CHECK(rig.name == "CW-7, bench 3");
    CHECK(rig.port == "usb:0403:6001");
    CHECK(rig.baud == 921600);
    CHECK(rig.block_samples == 256);
    CHECK(rig.answer_s == 2.0);
    CHECK(rig.greet_s == 5.0);
    CHECK(rig.before_run.empty());
    CHECK(rig.before_run_limit_s == 120.0);
    CHECK(rig.attempts == 1);
    CHECK(!wants_image(rig));
}

TEST_CASE("rig: every word is taken", "[config]") {
    const std::string text =
        with(with(good_rig, "port = \"usb:0403:6001\"", "port = \"./tty\"\nbaud = 115200"), "form = \"framed\"",
             "form = \"framed\"\nblock_samples = 16\nanswer_s = 0.5\ngreet_s = 9") +
        "[commands]\nbefore_run = [[\"./flash.sh\", \"--file={image}\", \"a b\"], [\"true\"]]\nbefore_run_limit_s = "
        "3\n";
    const Rig rig = rig_of(text);
    CHECK(rig.port == "lab/tty");
    CHECK(rig.baud == 115200);
    CHECK(rig.block_samples == 16);
    CHECK(rig.answer_s == 0.5);
    CHECK(rig.greet_s == 9.0);
    REQUIRE(rig.before_run.size() == 2);
    CHECK(wants_image(rig));
    CHECK(with_image(rig.before_run[0], "/x/{image}.elf") ==
          std::vector<std::string>{"./flash.sh", "--file=/x/{image}.elf", "a b"});
    CHECK(with_image({"{image}{image}"}, "i") == std::vector<std::string>{"ii"});
    CHECK(rig.before_run[1] == std::vector<std::string>{"true"});
    CHECK(rig.before_run_limit_s == 3.0);
    CHECK(rig_of(with(good_rig, "usb:0403:6001", "/dev/ttyUSB0")).port == "/dev/ttyUSB0");
    CHECK(rig_of(with(good_rig, "usb:0403:6001", "usb:0403:6001:A5 02")).port == "usb:0403:6001:A5 02");
}

TEST_CASE("rig: an invalid case may run up to ten times", "[config]") {
    CHECK(rig_of(good_rig + "[run]\n").attempts == 1);
    CHECK(rig_of(good_rig + "[run]\nattempts = 1\n").attempts == 1);
    CHECK(rig_of(good_rig + "[run]\nattempts = 10\n").attempts == 10);
    const auto refusal = [](const std::string& line, const std::string& at, const std::string& problem,
                            const std::string& remedy) {
        const std::string text = good_rig + "[run]\n" + line + "\n";
        CHECK(rig_problems(text) == message(text, 10, at, problem, remedy, "lab/rig.toml"));
    };
    refusal("attempts = 0", "0", "attempts = 0 is below 1", "give a whole number from 1 to 10");
    refusal("attempts = 11", "11", "attempts = 11 is above 10", "give a whole number from 1 to 10");
    refusal("attempts = 2.0", "2.0", "attempts is the number 2.0, wanted a whole number",
            "write attempts = 16, without a decimal point and without quotation marks");
    refusal("attempt = 2", "attempt", "unknown key \"attempt\" in [run]", "did you mean attempts?");
}

TEST_CASE("rig: without the statement that the board is isolated nothing is streamed", "[config]") {
    const std::string remedy =
        "disconnect actuators, mains, patients and loads; then write isolated = true below [board]";
    refused("isolated = true\n", "", 1, "[board]",
            "[board] does not say isolated = true: a stimulus can move what is wired to the board", remedy);
    refused("isolated = true", "isolated = false", 3, "false",
            "isolated = false: a stimulus can move what is wired to the board, so nothing is streamed", remedy);
    refused("isolated = true", "isolated = \"true\"", 3, "\"true\"", "isolated is a string, wanted true", remedy);
    refused("isolated = true", "isolated = 1", 3, "1", "isolated is a whole number, wanted true", remedy);
}

TEST_CASE("rig: links and wires of later versions are told from slips of the pen", "[config]") {
    for (const std::string use : {"tcp", "rfc2217", "process"}) {
        refused("use = \"serial\"", "use = \"" + use + "\"", 5, "\"" + use,
                "use = \"" + use + "\" is not in this version", "write use = \"serial\"");
    }
    refused("use = \"serial\"", "use = \"seral\"", 5, "\"seral\"", "use = \"seral\" is not known",
            "did you mean \"serial\"?");
    for (const std::string form : {"raw", "lines", "log"}) {
        refused("form = \"framed\"", "form = \"" + form + "\"", 8, "\"" + form,
                "form = \"" + form + "\" is not in this version", "write form = \"framed\"");
    }
    refused("form = \"framed\"", "form = \"frame\"", 8, "\"frame\"", "form = \"frame\" is not known",
            "did you mean \"framed\"?");
}

TEST_CASE("rig: numbers out of range, wrong types, unknown and missing keys", "[config]") {
    refused("port = \"usb:0403:6001\"", "port = \"usb:0403:6001\"\nbaud = 299", 7, "299", "baud = 299 is below 300",
            "give a whole number from 300 to 12000000 baud");
    refused("port = \"usb:0403:6001\"", "port = \"usb:0403:6001\"\nbaud = 12000001", 7, "12000001",
            "baud = 12000001 is above 12000000", "give a whole number from 300 to 12000000 baud");
    refused("form = \"framed\"", "form = \"framed\"\nblock_samples = 0", 9, "0", "block_samples = 0 is below 1",
            "give a whole number from 1 to 4096 samples");
    refused("form = \"framed\"", "form = \"framed\"\nblock_samples = 4097", 9, "4097",
            "block_samples = 4097 is above 4096", "give a whole number from 1 to 4096 samples");
    refused("form = \"framed\"", "form = \"framed\"\nanswer_s = nan", 9, "nan", "answer_s = nan is no finite number",
            "give a number from 0.01 to 3600 s");
    refused("form = \"framed\"", "form = \"framed\"\ngreet_s = 0", 9, "0", "greet_s = 0 is below 0.01",
            "give a number from 0.01 to 3600 s");
    refused("port = \"usb:0403:6001\"", "port = 3", 6, "3", "port is the whole number 3, wanted a string",
            "write port = \"...\"");
    refused("port = \"usb:0403:6001\"\n", "", 4, "[link]", "[link] has no port",
            "add port: a stable name as `halflsb ports` lists them (usb:VID:PID or usb:VID:PID:SERIAL), or the path of "
            "a device; one that starts with ./ is taken from the rig's folder");
    refused("name = \"CW-7, bench 3\"", "nmae = \"x\"\nname = \"y\"", 2, "nmae", "unknown key \"nmae\" in [board]",
            "did you mean name?");
    refused("[wire]\nform = \"framed\"\n", "", 1, "[board]", "the file has no [wire]",
            "add it; docs/plan.md and docs/rig.md show how");
    refused("[wire]\n", "[wire]\nname = \"x\"\n", 8, "name", "unknown key \"name\" in [wire]",
            "known here: form, block_samples, answer_s and greet_s");
    for (const std::string port : {"usb:", "usb:0403", "usb:403:6001", "usb:0403:601", "usb:0403:", "usb:04035:6001",
                                   "usb:0403:600g", "usb:0403:6001:"}) {
        refused("usb:0403:6001", port, 6, "\"" + port, "port = \"" + port + "\" is no name of a USB port",
                "write usb:VID:PID or usb:VID:PID:SERIAL with four hex digits each, as in usb:0403:6001; "
                "halflsb ports lists them");
    }
}

TEST_CASE("rig: commands are lists of arguments, nothing else", "[config]") {
    const std::string how =
        "write before_run = [[\"./flash.sh\", \"{image}\"]]: a list of commands, each a list of strings";
    refused_addition("before_run = \"./flash.sh\"", "\"./flash.sh\"",
                     "before_run is a string, wanted a list of commands",
                     "write before_run = [[\"./flash.sh\", \"{image}\"]]; there is no shell");
    refused_addition("before_run = [\"./flash.sh\"]", "\"./flash.sh\"",
                     "in before_run stands a string, wanted a list of arguments", how);
    refused_addition("before_run = [[]]", "[]]", "a command without arguments", how);
    refused_addition("before_run = [[\"\"]]", "\"\"", "the name of the command is empty", how);
    refused_addition("before_run = [[\"x\", 3]]", "3", "an argument is a whole number, wanted a string", how);
    refused_addition("before_run = [[\"x\", \"a\\u0000b\"]]", "\"a", "an argument holds a NUL",
                     "no program can be given one");
    refused_addition("before_run = [[\"x\", \"{image} {port}\"]]", "\"{image}", "nothing replaces \"{port}\"",
                     "only {image} is known: the file of --image");
    refused_addition("before_run_limit_s = 0", "0", "before_run_limit_s = 0 is below 0.1",
                     "give a number from 0.1 to 86400 s");
    refused_addition("befor_run = [[\"x\"]]", "befor_run", "unknown key \"befor_run\" in [commands]",
                     "did you mean before_run?");
    refused_addition("after_run = [[\"x\"]]", "after_run", "unknown key \"after_run\" in [commands]",
                     "known here: before_run_limit_s and before_run");
    CHECK(rig_of(good_rig + "[commands]\nbefore_run = [[\"sh\", \"-c\", \"echo {\"]]\n").before_run[0][2] == "echo {");
    CHECK(rig_of(good_rig + "[commands]\nbefore_run = [[\"x\", \"\"]]\n").before_run[0][1].empty());
}

TEST_CASE("rig: a missing file, an empty one, and everything wrong at once", "[config]") {
    const auto read = read_rig("none.toml", FakeFiles{});
    REQUIRE(std::holds_alternative<ReadProblems>(read));
    CHECK(joined(std::get<ReadProblems>(read)) ==
          "none.toml: there is no such file\n  check the path; it is taken from the current folder\n");
    CHECK(rig_problems("\n") ==
          "lab/rig.toml:1:1: the file is empty\n    \n    ^\n  docs/rig.md shows what belongs in it\n");
    const std::string said =
        rig_problems("[board]\n[link]\nuse = 3\nport = \"\"\nbaud = \"x\"\n[wire]\nfrom = \"framed\"\n[plan]\n");
    // name, isolated; use, port, baud; form missing, from unknown; plan unknown.
    CHECK(std::count(said.begin(), said.end(), '^') == 8);
}
