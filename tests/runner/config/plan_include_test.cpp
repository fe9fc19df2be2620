// A plan that is spread over several files.
#include <filesystem>
#include <fstream>

#include "tests/support/config_texts.hpp"
#include "tests/support/temporary_folder.hpp"

using namespace halflsb;

namespace {

/// [signal] without its rate, a filter, a rule and a case.
const std::string common =
    "[signal]\n"              // 1
    "input = \"q15\"\n"       // 2
    "output = \"q15\"\n"      // 3
    "[[filter]]\n"            // 4
    "kind = \"fir\"\n"        // 5
    "taps = [0.5, 0.5]\n"     // 6
    "[[rule]]\n"              // 7
    "kind = \"error\"\n"      // 8
    "max_lsb = 1.5\n"         // 9
    "[[case]]\n"              // 10
    "name = \"settling\"\n"   // 11
    "[case.stimulus]\n"       // 12
    "shape = \"step\"\n"      // 13
    "length_samples = 64\n";  // 14

const std::string plan =
    "title = \"CW-7\"\n"                          // 1
    "include = [\"shared/common.toml\"]\n"        // 2
    "[signal]\n"                                  // 3
    "rate_hz = 1200.0\n"                          // 4
    "[[filter]]\n"                                // 5
    "kind = \"moving-average\"\n"                 // 6
    "points = 4\n"                                // 7
    "[[case]]\n"                                  // 8
    "name = \"belt noise\"\n"                     // 9
    "[case.stimulus]\n"                           // 10
    "shape = \"noise\"\n"                         // 11
    "length_samples = 4096\n"                     // 12
    "[[case.rule]]\n"                             // 13
    "kind = \"latency\"\nlatency_samples = 0\n";  // 14

FakeFiles shared(const std::string& text) {
    FakeFiles files;
    files.contents["./shared/common.toml"] = text;
    return files;
}

}  // namespace

TEST_CASE("include: what is included comes first, tables are joined key by key", "[config]") {
    const Plan read = plan_of(plan, shared(common));
    CHECK(read.title == "CW-7");
    CHECK(read.signal.rate_hz == 1200.0);
    CHECK(read.signal.input.name == "q15");
    REQUIRE(read.filter.size() == 2);
    CHECK(std::holds_alternative<Fir>(read.filter[0].design));
    CHECK(std::holds_alternative<MovingAverage>(read.filter[1].design));
    REQUIRE(read.cases.size() == 2);
    CHECK(read.cases[0].name == "settling");
    CHECK(read.cases[1].name == "belt noise");
    // Positions call an included file by its path under the root.
    CHECK(to_text(read.cases[0].position) == "shared/common.toml:10:1");
    CHECK(to_text(read.cases[0].rules[0].position) == "shared/common.toml:7:1");
    CHECK(to_text(read.cases[1].position) == "plan.toml:8:1");
    CHECK(to_text(read.cases[1].rules[0].position) == "plan.toml:13:1");
}

TEST_CASE("include: the record gets the bytes of every file that was read, each once", "[config]") {
    FakeFiles files = shared(with(common, "taps = [0.5, 0.5]", "taps_file = \"taps.txt\""));
    files.contents["./taps.txt"] = "0.5\n0.5\n";
    const std::string text = "\xEF\xBB\xBF" + with(plan, "kind = \"moving-average\"\npoints = 4",
                                                   "kind = \"fir\"\ntaps_file = \"taps.txt\"");
    const Plan read = plan_of(text, files);
    REQUIRE(read.parts.size() == 3);
    CHECK(read.parts[0].path.empty());
    CHECK(read.parts[0].bytes == text);
    CHECK(read.parts[1].path == "shared/common.toml");
    CHECK(read.parts[2].path == "taps.txt");
    CHECK(read.parts[2].bytes == "0.5\n0.5\n");
}

TEST_CASE("include: a recorded plan is read under its old name", "[config]") {
    PlanOptions options;
    options.shown_name = "cw7/acceptance.toml";
    const Plan read = plan_of(plan, shared(common), options);
    CHECK(read.file == "cw7/acceptance.toml");
    CHECK(to_text(read.cases[1].position) == "cw7/acceptance.toml:8:1");
    CHECK(to_text(read.cases[0].position) == "shared/common.toml:10:1");
    // Messages are about the file that was read.
    CHECK(
        plan_problems(with(plan, "points = 4", "points = 0"), shared(common), options).starts_with("plan.toml:7:10: "));
}

TEST_CASE("include: the title of the including file wins, that of an included one stands in for it", "[config]") {
    CHECK(plan_of(plan, shared("title = \"shared\"\n" + common)).title == "CW-7");
    CHECK(plan_of(with(plan, "title = \"CW-7\"\n", ""), shared("title = \"shared\"\n" + common)).title == "shared");
    FakeFiles files = shared("title = \"shared\"\n" + common);
    files.contents["./other.toml"] = "title = \"other\"\n";
    const std::string both = with(plan, "[\"shared/common.toml\"]", "[\"shared/common.toml\", \"other.toml\"]");
    CHECK(plan_of(both, files).title == "CW-7");
    CHECK(plan_problems(with(both, "title = \"CW-7\"\n", ""), files) ==
          "./other.toml:1:1: \"title\" is given a second time, the first in line 1 of ./shared/common.toml\n"
          "    title = \"other\"\n    ^\n  keep one of the two\n");
}

TEST_CASE("include: a key that both give is refused at the second, with the place of the first", "[config]") {
    CHECK(plan_problems(with(plan, "rate_hz = 1200.0", "rate_hz = 1200.0\ninput = \"q15\""), shared(common)) ==
          "plan.toml:5:1: \"input\" is given a second time, the first in line 2 of ./shared/common.toml\n"
          "    input = \"q15\"\n    ^\n  keep one of the two\n");
    // A table in one file and a list in the other.
    CHECK(plan_problems(with(plan, "[signal]\nrate_hz = 1200.0\n", "[[signal]]\n"), shared(common))
              .starts_with("plan.toml:3:3: \"signal\" is given a second time, the first in line 1 of "
                           "./shared/common.toml\n"));
}

TEST_CASE("include: problems of an included file show its own line, after those of the plan", "[config]") {
    CHECK(plan_problems(with(plan, "points = 4", "pionts = 4"),
                        shared(with(common, "length_samples = 64", "length_samples = 0"))) ==
          "plan.toml:5:1: [[filter]] of kind \"moving-average\" has no points\n    [[filter]]\n    ^\n"
          "  add points: how many samples are averaged, the newest included\n"
          "plan.toml:7:1: unknown key \"pionts\" in [[filter]] of kind \"moving-average\"\n    pionts = 4\n    ^\n"
          "  did you mean points?\n"
          "./shared/common.toml:14:18: length_samples = 0 is below 1\n    length_samples = 0\n                     ^\n"
          "  give a whole number from 1 to 10000000000 samples\n");
    // Two cases of one name in two files.
    CHECK(plan_problems(with(plan, "belt noise", "settling"), shared(common)) ==
          "plan.toml:9:8: two cases are called \"settling\", the other one in line 11 of ./shared/common.toml\n"
          "    name = \"settling\"\n           ^\n  give each case a name of its own; --case chooses by it\n");
    // What is missing in a joined table is told where the including file has it.
    CHECK(plan_problems(with(plan, "rate_hz = 1200.0\n", ""), shared(common))
              .starts_with("plan.toml:3:1: [signal] has no "
                           "rate_hz\n"));
}

TEST_CASE("include: the judge's refusals are told in the file of their rule", "[config]") {
    // A latency rule for a case whose stimulus is constant.
    const std::string text = plan_problems(
        plan, shared(common + "level_ratio = 0.0\n[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\n"));
    CHECK(text.starts_with("./shared/common.toml:16:1: "));
}

TEST_CASE("include: files that include each other, or one twice, are refused with their chain", "[config]") {
    FakeFiles files = shared("include = [\"levels.toml\"]\n" + common);
    files.contents["./levels.toml"] = "include = [\"shared/common.toml\"]\n";
    CHECK(plan_problems(plan, files) ==
          "./levels.toml:1:12: the includes run in a circle: ./shared/common.toml -> ./levels.toml -> "
          "./shared/common.toml\n    include = [\"shared/common.toml\"]\n               ^\n"
          "  take one of these includes out\n");
    files.contents["./levels.toml"] = "[signal]\nunit = \"g\"\n";
    CHECK(plan_problems(with(plan, "toml\"]", "toml\", \"levels.toml\"]"), files) ==
          "plan.toml:2:34: the file is included twice: plan.toml -> ./shared/common.toml -> ./levels.toml, and "
          "plan.toml -> ./levels.toml\n    include = [\"shared/common.toml\", \"levels.toml\"]\n"
          "                                     ^\n  keep one of the two includes\n");
}

TEST_CASE("include: what is no list of files is refused", "[config]") {
    CHECK(plan_problems(with(plan, "[\"shared/common.toml\"]", "\"shared/common.toml\"")) ==
          "plan.toml:2:11: include is a string, wanted a list of files\n    include = \"shared/common.toml\"\n"
          "              ^\n"
          "  write include = [\"common.toml\"], with paths under the root, or leave it out\n");
    CHECK(
        plan_problems(with(plan, "[\"shared/common.toml\"]", "[]")).starts_with("plan.toml:2:11: include is empty\n"));
    CHECK(plan_problems(with(plan, "[\"shared/common.toml\"]", "[7]"))
              .starts_with("plan.toml:2:12: in include stands a whole number, wanted the name of a file\n"));
    // Under a header it would be that table's.
    CHECK(plan_problems(with(good_plan, "[signal]\n", "[signal]\ninclude = [\"a.toml\"]\n")) ==
          "plan.toml:4:1: \"include\" belongs to the top of the file, here it stands in [signal]\n"
          "    include = [\"a.toml\"]\n    ^\n  move the line above the first header\n");
}

TEST_CASE("include: a file that is missing or no plan is refused at its line, and nothing else is told", "[config]") {
    CHECK(plan_problems(plan) ==
          "plan.toml:2:12: include \"shared/common.toml\": there is no such file\n"
          "    include = [\"shared/common.toml\"]\n               ^\n"
          "  paths in a plan are taken from the root .\n");
    CHECK(plan_problems(plan, shared("[signal]\ninput = q15\n")) ==
          "plan.toml:2:12: include \"shared/common.toml\": the file is no plan\n"
          "    include = [\"shared/common.toml\"]\n               ^\n"
          "  correct it; the next message says where\n"
          "./shared/common.toml:2:9: this is not a value\n    input = q15\n            ^\n"
          "  text stands in quotation marks; a number has a decimal point, not a comma; true and false are in small "
          "letters\n");
    CHECK(plan_problems(plan, shared(std::string("a\0b", 3))).find("./shared/common.toml:1:2: ") != std::string::npos);
    CHECK(plan_problems(plan, shared(" \n")).find("./shared/common.toml:1:1: the file is empty") != std::string::npos);
}

TEST_CASE("include: 64 files are taken, one more is refused", "[config]") {
    FakeFiles files = shared(common);
    std::string list = "\"shared/common.toml\"";
    for (int i = 1; i < 64; ++i) {
        const std::string name = "part" + std::to_string(i) + ".toml";
        files.contents["./" + name] = "# nothing\n";
        list += ", \"" + name + "\"";
    }
    CHECK(plan_problems(with(plan, "\"shared/common.toml\"", list), files).empty());
    files.contents["./last.toml"] = "# nothing\n";
    const std::string refused = plan_problems(with(plan, "\"shared/common.toml\"", list + ", \"last.toml\""), files);
    CHECK(refused.find(": more than 64 files are included\n") != std::string::npos);
    CHECK(refused.find("\n  join some of them\n") != std::string::npos);
}

TEST_CASE("include: on a disk, nothing outside the root is read, and one file under two names is one", "[config]") {
    TemporaryFolder folder;
    const auto write = [&](const std::string& name, const std::string& text) {
        std::filesystem::create_directories(std::filesystem::path(folder / name).parent_path());
        std::ofstream(folder / name) << text;
    };
    write("lab/shared/common.toml", common);
    write("secret.toml", common);
    DiskFiles files;
    const auto problems_of = [&](const std::string& include) {
        write("lab/plan.toml", with(plan, "[\"shared/common.toml\"]", include));
        const auto read = read_plan(folder / "lab/plan.toml", files);
        const auto* problems = std::get_if<ReadProblems>(&read);
        return problems == nullptr ? std::string() : joined(*problems);
    };
    const std::string place = folder / "lab/plan.toml:2:12: ";
    CHECK(problems_of("[\"shared/common.toml\"]").empty());
    CHECK(problems_of("[\"../secret.toml\"]")
              .starts_with(place + "include \"../secret.toml\": it lies outside the root " + (folder / "lab\n")));
    std::filesystem::create_symlink(folder / "secret.toml", folder / "lab/link.toml");
    CHECK(problems_of("[\"link.toml\"]").starts_with(place + "include \"link.toml\": it lies outside the root "));
    CHECK(problems_of("[\"shared\"]").starts_with(place + "include \"shared\": it is a folder, not a regular file\n"));
    CHECK(problems_of("[\".\"]").starts_with(place + "include \".\": it is a folder, not a regular file\n"));
    CHECK(problems_of("[\"" + (folder / "secret.toml") + "\"]").find(": the path is absolute\n") != std::string::npos);
    CHECK(problems_of("[\"shared/none.toml\"]")
              .starts_with(place + "include \"shared/none.toml\": there is no such file\n"));
    CHECK(problems_of("[\"plan.toml\"]").starts_with(place + "the includes run in a circle: "));
    CHECK(problems_of("[\"shared/common.toml\", \"./shared/../shared/common.toml\"]")
              .find("the file is included twice") != std::string::npos);
    write("lab/large.toml", std::string(largest_config_bytes + 1, '#'));
    CHECK(problems_of("[\"large.toml\"]").find("it has 1048576 bytes, the most allowed are 1048575; it was not read") !=
          std::string::npos);
}

TEST_CASE("plan: a root that does not exist is refused even when no file is named", "[config]") {
    TemporaryFolder folder;
    std::ofstream(folder / "plan.toml") << good_plan;
    DiskFiles files;
    const auto problems_of = [&](const std::string& root) {
        PlanOptions options;
        options.root = root;
        const auto read = read_plan(folder / "plan.toml", files, options);
        const auto* problems = std::get_if<ReadProblems>(&read);
        return problems == nullptr ? std::string() : joined(*problems);
    };
    CHECK(problems_of(folder.path()).empty());
    CHECK(problems_of(folder / "none").starts_with("--root: there is no folder \""));
    CHECK(problems_of(folder / "plan.toml").starts_with("--root: there is no folder \""));
    CHECK(problems_of("/nowhere") ==
          "--root: there is no folder \"/nowhere\"\n  give a folder that exists; files that the plan names lie under "
          "it\n");
}
