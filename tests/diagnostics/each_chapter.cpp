// One case for many values, and a plan of several files.
#include <string>
#include <vector>

#include "tests/diagnostics/plan_page.hpp"

namespace halflsb::diagnostics {

namespace {

struct Body {
    std::string_view done;
    std::string each;
};

std::string counted_list(int count) {
    std::string list = "[";
    for (int i = 1; i <= count; ++i) list += (i == 1 ? "" : ", ") + std::to_string(i);
    return list + "]";
}

std::vector<Body> bodies() {
    return {
        {"nothing varies", ""},
        {"a single value", "seed = 3\n"},
        {"no value", "\"stimulus.seed\" = []\n"},
        {"a value twice", "\"stimulus.seed\" = [3, 4, 3]\n"},
        {"a key that no case has", "level_ratio = [0.1, 0.5]\n"},
        {"a key of the stimulus that it does not have", "\"stimulus.tilt\" = [0.1, 0.5]\n"},
        {"a key of the filter", "\"filter.points\" = [4, 8]\n"},
        {"the name of the case", "name = [\"a\", \"b\"]\n"},
        {"the labels of the case", "labels = [[\"a\"], [\"b\"]]\n"},
        {"a key that the case sets too", "\"stimulus.length_samples\" = [100, 200]\n"},
        {"a key that is set by two keys",
         "\"stimulus.seed\" = [1, 2]\nspeed = [{ name = \"slow\", stimulus.seed = 3 }]\n"},
        {"plain values and tables", "speed = [{ name = \"slow\", rate_hz = 600.0 }, 3]\n"},
        {"a table without a name", "speed = [{ rate_hz = 600.0 }]\n"},
        {"a table whose name is a number", "speed = [{ name = 3, rate_hz = 600.0 }]\n"},
        {"one of the values out of its range", "\"stimulus.level_ratio\" = [0.5, 1.5]\n"},
        {"a name that grows too long", "speed = [{ name = \"" + std::string(80, 'w') + "\", rate_hz = 600.0 }]\n"},
        {"more cases than there may be",
         "\"stimulus.seed\" = " + counted_list(101) + "\nrate_hz = " + counted_list(100) + "\n"},
    };
}

const std::string common = R"([signal]
input = "q15"
output = "q15"
[[filter]]
kind = "moving-average"
points = 4
[[rule]]
kind = "error"
max_lsb = 1.5
)";

const std::string plan = R"(title = "CW-7 load cell"
include = ["common.toml"]
[signal]
rate_hz = 1200.0
[[case]]
name = "belt noise"
[case.stimulus]
shape = "noise"
length_samples = 4096
)";

void show_includes(Page& page) {
    FakeFiles files;
    files.contents["./common.toml"] = common;
    files.contents["./other.toml"] = "[signal]\nrate_hz = 600.0\n";
    files.contents["./broken.toml"] = "[signal\n";
    files.contents["./empty.toml"] = "\n";
    files.contents["./circle.toml"] = "include = [\"ring.toml\"]\n";
    files.contents["./ring.toml"] = "include = [\"circle.toml\"]\n";
    const std::string list = "[\"common.toml\"]";
    std::string many = "[";
    for (int i = 0; i < 200; ++i) {
        const std::string name = "part-" + std::to_string(i) + ".toml";
        files.contents["./" + name] = "# nothing\n";
        many += (i == 0 ? "\"" : ", \"") + name + "\"";
    }
    show_changes(page, plan,
                 {
                     {"include is no list", list, "\"common.toml\""},
                     {"include is an empty list", list, "[]"},
                     {"include of a number", list, "[3]"},
                     {"an included file is not there", list, "[\"comon.toml\"]"},
                     {"an included file outside the root", list, "[\"../common.toml\"]"},
                     {"an included file is no TOML", list, "[\"broken.toml\"]"},
                     {"an included file is empty", list, "[\"empty.toml\"]"},
                     {"includes in a circle", list, "[\"circle.toml\"]"},
                     {"a file included twice", list, "[\"common.toml\", \"common.toml\"]"},
                     {"a key that an included file gives too", list, "[\"common.toml\", \"other.toml\"]"},
                 },
                 files);
    const std::string all = many + "]";
    show_changes(page, plan, {{"too many included files", list, all}}, files);
}

}  // namespace

void each_chapter(Page& page) {
    page.chapter("Cases for many values, [case.each]");
    for (const Body& body : bodies()) {
        Parts parts;
        parts.after = "[case.each]\n" + body.each;
        show_plan(page, body.done, parts.text());
    }
    Parts parts;
    parts.of_case = "each = [1, 2]\n";
    show_plan(page, "each is a list", parts.text());
    parts.of_case.clear();
    parts.filter = "kind = \"fir\"\ntaps = [1.0]\n";
    std::string long_list = "frequencies_hz = [1.0";
    for (int i = 0; i < 600; ++i) long_list += ", " + std::to_string(2 + i) + ".0";
    parts.signal = "rate_hz = 1300.0\ninput = \"q15\"\noutput = \"q15\"\n";
    parts.stimulus = "shape = \"multitone\"\nlength_samples = 4096\n" + long_list + "]\n";
    parts.after = "[case.each]\n\"stimulus.seed\" = " + counted_list(9000) + "\n";
    show_plan(page, "many cases, each with a long list", parts.text());
    page.chapter("Plans of several files, include");
    show_includes(page);
}

}  // namespace halflsb::diagnostics
