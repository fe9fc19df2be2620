// [case.each]: one case for each combination of values.
#include "runner/config/plan_each.hpp"

#include <array>

#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

const std::string signal_and_filter =
    "title = \"CW-7\"\n"           // 1
    "[signal]\n"                   // 2
    "rate_hz = 1200.0\n"           // 3
    "input = \"q15\"\n"            // 4
    "output = \"q15\"\n"           // 5
    "[[filter]]\n"                 // 6
    "kind = \"moving-average\"\n"  // 7
    "points = 16\n"                // 8
    "[[rule]]\n"                   // 9
    "kind = \"error\"\n"           // 10
    "max_lsb = 1.5\n"              // 11
    "[[case]]\n"                   // 12
    "name = \"tare step\"\n"       // 13
    "[case.stimulus]\n"            // 14
    "shape = \"step\"\n"           // 15
    "length_samples = 256\n"       // 16
    "[case.each]\n";               // 17

std::vector<std::string> names_of(const Plan& plan) {
    std::vector<std::string> names;
    for (const Case& the_case : plan.cases) names.push_back(the_case.name);
    return names;
}

std::vector<std::string> names_with(const std::string& each) { return names_of(plan_of(signal_and_filter + each)); }

std::string problems_with(const std::string& each) { return plan_problems(signal_and_filter + each); }

/// A case's table of which only the tree is looked at, and its expansions.
struct Expanded {
    explicit Expanded(const std::string& text) : source("f", text), problems(source) {
        auto parsed = parse_toml(source);
        if (const auto* problem = std::get_if<std::string>(&parsed)) FAIL(*problem);
        tree = std::get<TomlValue>(std::move(parsed));
        const CaseExpansion expansion(tree.find("case")->value.items.at(0), problems);
        INFO(joined(problems.sorted()));
        REQUIRE(expansion.is_clean());
        for (std::size_t i = 0; i < static_cast<std::size_t>(expansion.count()); ++i)
            cases.push_back(*expansion.at(i, problems));
    }
    SourceText source;
    Problems problems;
    TomlValue tree;
    std::vector<TomlValue> cases;
};

}  // namespace

TEST_CASE("each: one case for each combination, the last key varying fastest", "[config]") {
    const Plan plan =
        plan_of(signal_and_filter + "\"stimulus.level_ratio\" = [0.1, 0.5, 1.0]\n\"stimulus.at_samples\" = [0, 64]\n");
    CHECK(names_of(plan) == std::vector<std::string>{
                                "tare step, level_ratio 0.1, at_samples 0", "tare step, level_ratio 0.1, at_samples 64",
                                "tare step, level_ratio 0.5, at_samples 0", "tare step, level_ratio 0.5, at_samples 64",
                                "tare step, level_ratio 1, at_samples 0", "tare step, level_ratio 1, at_samples 64"});
    // The values reach the stimulus.
    const auto first_code = [&](std::size_t index, std::int64_t sample) {
        std::array<Code, 1> code{};
        fill_codes(*plan.cases[index].stimulus, plan.signal.input, plan.signal.quantise, sample, code);
        return code[0];
    };
    CHECK(first_code(0, 0) == 3277);
    CHECK(first_code(1, 63) == 0);
    CHECK(first_code(1, 64) == 3277);
    CHECK(first_code(2, 0) == 16384);
    CHECK(to_text(plan.cases[5].position) == "plan.toml:12:1");
}

TEST_CASE("each: unquoted dotted keys and headers below [case.each] say the same", "[config]") {
    const auto quoted_keys =
        names_with("\"stimulus.level_ratio\" = [0.1]\nstart = [\"reset\"]\n\"stimulus.at_samples\" = [1, 2]\n");
    CHECK(quoted_keys == std::vector<std::string>{"tare step, level_ratio 0.1, start reset, at_samples 1",
                                                  "tare step, level_ratio 0.1, start reset, at_samples 2"});
    // The order is that of the lines, although TOML puts both keys of the stimulus into one table.
    CHECK(names_with("stimulus.level_ratio = [0.1]\nstart = [\"reset\"]\nstimulus.at_samples = [1, 2]\n") ==
          quoted_keys);
    CHECK(names_with("start = [\"reset\"]\n[case.each.stimulus]\nlevel_ratio = [0.1]\n") ==
          std::vector<std::string>{"tare step, start reset, level_ratio 0.1"});
    CHECK(names_with("stimulus = { level_ratio = [0.1] }\n") == std::vector<std::string>{"tare step, level_ratio 0.1"});
}

TEST_CASE("each: a table of values sets several keys, and its name stands for it", "[config]") {
    const Plan plan =
        plan_of(signal_and_filter +
                "size = [{ name = \"small\", \"stimulus.level_ratio\" = 0.1, \"stimulus.at_samples\" = 8 },\n"
                "        { name = \"large\", stimulus.level_ratio = 0.5, start = \"reset\" },\n"
                "        { name = \"full\" }]\n");
    CHECK(names_of(plan) ==
          std::vector<std::string>{"tare step, size small", "tare step, size large", "tare step, size full"});
    CHECK(std::get<std::int64_t>(plan.cases[0].stimulus_values.all().at("at_samples")) == 8);
    CHECK(std::get<double>(plan.cases[1].stimulus_values.all().at("level_ratio")) == 0.5);
    CHECK(!plan.cases[2].stimulus_values.has("level_ratio"));
}

TEST_CASE("each: 12 levels, 3 rates and 2 channels are 72 cases with readable names in under 25 lines", "[config]") {
    const std::string text =
        "title = \"CW-7 load cell, levels, rates and channels\"\n"
        "[signal]\n"
        "rate_hz = 1200.0\n"
        "input = \"q15\"\n"
        "output = \"q15\"\n"
        "channels = 2\n"
        "[[filter]]\n"
        "kind = \"moving-average\"\n"
        "points = 16\n"
        "[[rule]]\n"
        "kind = \"error\"\n"
        "max_lsb = 1.5\n"
        "[[case]]\n"
        "name = \"tare step\"\n"
        "[case.stimulus]\n"
        "shape = \"step\"\n"
        "at_samples = 64\n"
        "length_samples = 2048\n"
        "[case.each]\n"
        "\"stimulus.level_ratio\" = [0.01, 0.02, 0.05, 0.1, 0.2, 0.3, 0.4, 0.5, 0.7, 0.8, 0.9, 1.0]\n"
        "rate_hz = [600.0, 1200.0, 2400.0]\n"
        "\"stimulus.channel\" = [1, 2]\n";
    CHECK(SourceText("plan.toml", text).line_count() < 25);
    const Expanded expanded(text);
    REQUIRE(expanded.cases.size() == 72);
    const auto name = [&](std::size_t i) { return expanded.cases[i].find("name")->value.text; };
    CHECK(name(0) == "tare step, level_ratio 0.01, rate_hz 600, channel 1");
    CHECK(name(1) == "tare step, level_ratio 0.01, rate_hz 600, channel 2");
    CHECK(name(2) == "tare step, level_ratio 0.01, rate_hz 1200, channel 1");
    CHECK(name(71) == "tare step, level_ratio 1, rate_hz 2400, channel 2");
    const TomlValue& last = expanded.cases[71];
    CHECK(last.find("each") == nullptr);
    CHECK(last.find("stimulus")->value.find("level_ratio")->value.real == 1.0);
    CHECK(last.find("rate_hz")->value.real == 2400.0);
    CHECK(last.find("stimulus")->value.find("channel")->value.integer == 2);
    // The place of a value is that in the list, so that every message points there.
    CHECK(last.find("rate_hz")->value.place == Place{21, 27});
    CHECK(last.find("rate_hz")->key_place == Place{21, 1});
    const Plan plan = plan_of(text);
    REQUIRE(plan.cases.size() == 72);
    CHECK(plan.cases[71].name == name(71));
    CHECK(plan.cases[71].rate_hz == 2400.0);
    CHECK(plan.cases[71].channel == 2);
    CHECK(plan.cases[0].rate_hz == 600.0);
}

TEST_CASE("each: settings, whole lists and truth values vary too", "[config]") {
    const Expanded expanded(
        "[[case]]\nname = \"n\"\n[case.each]\n\"settings.gain\" = [1, 2]\n\"stimulus.parts\" = [[{ shape = \"step\" "
        "}], []]\n"
        "flag = [true]\n\"stimulus.tones_hz\" = [[10.0, 20.5]]\n");
    REQUIRE(expanded.cases.size() == 4);
    CHECK(expanded.cases[0].find("name")->value.text == "n, gain 1, parts #1, flag true, tones_hz [10, 20.5]");
    CHECK(expanded.cases[3].find("name")->value.text == "n, gain 2, parts [], flag true, tones_hz [10, 20.5]");
    CHECK(expanded.cases[3].find("settings")->value.find("gain")->value.integer == 2);
    CHECK(expanded.cases[0].find("stimulus")->value.find("parts")->value.items.size() == 1);
}

TEST_CASE("each: what the reader refuses is told at the value in the list, once", "[config]") {
    const std::string text = problems_with("\"stimulus.level_ratio\" = [0.1, 1.5]\nstart = [\"reset\", \"rest\"]\n");
    CHECK(text.starts_with("plan.toml:18:32: level_ratio = 1.5 "));
    CHECK(text.find("\nplan.toml:19:19: start = \"rest\" is not known\n") != std::string::npos);
    CHECK(std::count(text.begin(), text.end(), '^') == 2);
    // Of a word that does not exist, at the key.
    CHECK(problems_with("\"stimulus.level\" = [0.1, 0.2]\n")
              .starts_with("plan.toml:18:1: unknown key \"level\" in [case.stimulus] of shape \"step\"\n"));
    CHECK(problems_with("starts = [\"reset\"]\n").starts_with("plan.toml:18:1: unknown key \"starts\" in [[case]]\n"));
}

TEST_CASE("each: a key that is set in the case too, or twice here, is refused with the other's line", "[config]") {
    CHECK(problems_with("\"stimulus.length_samples\" = [64, 128]\n") ==
          "plan.toml:18:1: \"stimulus.length_samples\" is set here and in line 16\n"
          "    \"stimulus.length_samples\" = [64, 128]\n    ^\n  take it out of the case, or out of [case.each]\n");
    CHECK(problems_with("size = [{ name = \"a\", \"stimulus.shape\" = \"noise\" }]\n")
              .starts_with("plan.toml:18:23: \"stimulus.shape\" is set here and in line 15\n"));
    CHECK(problems_with("start = [\"reset\"]\nsize = [{ name = \"a\", start = \"reset\" }]\n") ==
          "plan.toml:19:23: \"start\" is set here and in line 18\n"
          "    size = [{ name = \"a\", start = \"reset\" }]\n                          ^\n"
          "  let only one key of [case.each] set it\n");
    // The same key, quoted and with a dot of TOML.
    CHECK(problems_with("\"stimulus.level_ratio\" = [0.1]\nstimulus.level_ratio = [0.2]\n")
              .starts_with("plan.toml:19:10: \"stimulus.level_ratio\" is set here and in line 18\n"));
    CHECK(problems_with("size = [{ name = \"a\", \"stimulus.level_ratio\" = 0.1, stimulus.level_ratio = 0.2 }]\n")
              .find("is set here and in line 18\n") != std::string::npos);
}

TEST_CASE("each: no list, no value, no name, no key of a case", "[config]") {
    CHECK(problems_with("\"stimulus.level_ratio\" = 0.5\n") ==
          "plan.toml:18:26: stimulus.level_ratio is a number, wanted a list of values\n"
          "    \"stimulus.level_ratio\" = 0.5\n                             ^\n"
          "  write a list, \"stimulus.level_ratio\" = [0.1, 0.5] for example; a single value belongs into the case "
          "itself\n");
    CHECK(problems_with("start = []\n") ==
          "plan.toml:18:9: start has no values, so there would be no case\n    start = []\n            ^\n"
          "  give it at least one value\n");
    CHECK(
        problems_with("") ==
        "plan.toml:17:1: [case.each] varies nothing\n    [case.each]\n    ^\n  give it a key with a list of values\n");
    CHECK(problems_with("size = [{ start = \"reset\" }]\n") ==
          "plan.toml:18:9: this value of size has no name\n    size = [{ start = \"reset\" }]\n            ^\n"
          "  a table of values has a name that stands for it in the names of the cases: write { name = \"slow\", "
          "rate_hz = "
          "600.0 } for example\n");
    CHECK(
        problems_with("size = [{ name = 7 }]\n").starts_with("plan.toml:18:18: the name of a value must be a string"));
    CHECK(problems_with("size = [{ name = \"\" }]\n")
              .starts_with("plan.toml:18:18: the name of a value must be a string"));
    CHECK(problems_with("start = [\"reset\", { name = \"a\" }]\n")
              .starts_with("plan.toml:18:19: start mixes plain values and tables\n"));
    CHECK(problems_with("name = [\"a\", \"b\"]\n") ==
          "plan.toml:18:1: the name of a case cannot vary by itself\n    name = [\"a\", \"b\"]\n    ^\n"
          "  leave it out here: what varies is put behind the name of the case\n");
    CHECK(problems_with("labels = [[\"quick\"]]\n").starts_with("plan.toml:18:1: labels of a case cannot vary\n"));
    CHECK(problems_with("\"rule.max_lsb\" = [1, 2]\n").starts_with("plan.toml:18:1: rule of a case cannot vary\n"));
    CHECK(problems_with("\"signal.rate_hz\" = [1, 2]\n") ==
          "plan.toml:18:1: \"signal.rate_hz\" is no key of a case\n    \"signal.rate_hz\" = [1, 2]\n    ^\n"
          "  vary a key of [[case]], or one of its stimulus or settings: \"stimulus.level_ratio\"\n");
    for (const char* path : {"\"\"", "stimulus", "\"stimulus.\"", "\".x\""}) {
        INFO(path);
        CHECK(problems_with(std::string(path) + " = [1]\n").find(" is no key of a case\n") != std::string::npos);
    }
    CHECK(plan_problems(good_plan +
                        "[[case]]\nname = \"x\"\neach = 5\nstimulus = { shape = \"step\", length_samples = 5 }\n") ==
          "plan.toml:35:8: each is a whole number, wanted one table\n    each = 5\n           ^\n"
          "  write it under the header [case.each]\n");
}

TEST_CASE("each: cases of one name are refused at the value", "[config]") {
    CHECK(problems_with("\"stimulus.level_ratio\" = [0.1, 0.5, 1e-1]\n") ==
          "plan.toml:18:37: \"level_ratio 0.1\" is there twice, the other one in line 18, so two cases would have one "
          "name\n"
          "    \"stimulus.level_ratio\" = [0.1, 0.5, 1e-1]\n                                        ^\n"
          "  take one of the two out\n");
    CHECK(problems_with("size = [{ name = \"a\" }, { name = \"a\" }]\n").find("\"size a\" is there twice") !=
          std::string::npos);
    // Another case that is called as an expanded one.
    CHECK(problems_with("start = [\"reset\"]\n[[case]]\nname = \"tare step, start reset\"\n"
                        "stimulus = { shape = \"step\", length_samples = 5 }\n")
              .starts_with(
                  "plan.toml:20:8: two cases are called \"tare step, start reset\", the other one in line 13\n"));
}

TEST_CASE("each: a name that grows too long is told with the way out", "[config]") {
    const std::string word(56, 'w');
    CHECK(problems_with("size = [{ name = \"" + word + "\" }]\n") == "");
    CHECK(problems_with("size = [{ name = \"" + word + "wwwwwwww\" }]\n") == "");
    CHECK(
        problems_with("size = [{ name = \"" + word + "wwwwwwwww\" }]\n") ==
        "plan.toml:17:1: an expanded case would be called \"tare step, size " + std::string(41, 'w') +
            "...\", 81 characters\n    [case.each]\n    ^\n"
            "  give at most 80: shorten the name of the case, or give long values a name: { name = \"slow\", ... }\n");
}

TEST_CASE("each: 10,000 cases are taken, more are refused before anything is expanded", "[config]") {
    const auto list = [](const std::string& key, int count) {
        std::string text = key + " = [";
        for (int i = 0; i < count; ++i) text += (i > 0 ? ", " : "") + std::to_string(i);
        return text + "]\n";
    };
    const std::string at = list("\"stimulus.at_samples\"", 100);
    const auto levels = [&](int count) {
        std::string text = "\"stimulus.level_codes\" = [";
        for (int i = 0; i < count; ++i) text += (i > 0 ? ", " : "") + std::to_string(i + 1);
        return text + "]\n";
    };
    CHECK(plan_of(signal_and_filter + at + levels(100)).cases.size() == 10000);
    // The whole plan counts: a case more, below.
    CHECK(plan_problems(signal_and_filter + at + levels(100) +
                        "[[case]]\nname = \"one more\"\nstimulus = { shape = \"step\", length_samples = 5 }\n") ==
          "plan.toml:20:1: the plan has 10001 cases, the most are 10000\n    [[case]]\n    ^\n"
          "  vary fewer values in [case.each], or split the plan\n");
    CHECK(
        problems_with(at + levels(101)).starts_with("plan.toml:17:1: the plan has 10100 cases, the most are 10000\n"));
    std::string vast;
    for (int i = 0; i < 200; ++i) vast += list("k" + std::to_string(i), 100);
    CHECK(problems_with(vast).starts_with("plan.toml:17:1: the plan has more than 1e308 cases, the most are 10000\n"));
}

TEST_CASE("each: rules for every case count in each of them", "[config]") {
    std::string rules;
    for (int i = 0; i < 600; ++i) rules += "[[rule]]\nkind = \"error\"\nmax_lsb = 1\n";
    std::string each =
        "[[case]]\nname = \"n\"\nstimulus = { shape = \"step\", length_samples = 5 }\n[case.each]\nk = [";
    for (int i = 0; i < 1000; ++i) each += "{ name = \"" + std::to_string(i) + "\" },";
    CHECK(plan_problems(signal_and_filter.substr(0, signal_and_filter.find("[[case]]")) + rules + each + "]\n")
              .find("values, the most are 5000000\n") != std::string::npos);
}

TEST_CASE("each: long lists are not repeated without end", "[config]") {
    std::string long_list = "tones_hz = [";
    for (int i = 0; i < 60000; ++i) long_list += "1,";
    const std::string text = "[[case]]\nname = \"n\"\n[case.stimulus]\n" + long_list + "]\n[case.each]\nk = [";
    std::string keys;
    for (int i = 0; i < 100; ++i) keys += std::to_string(i) + ",";
    CHECK(plan_problems(signal_and_filter.substr(0, signal_and_filter.find("[[case]]")) + text + keys + "]\n") ==
          "plan.toml:16:1: the cases hold 6001500 values, the most are 5000000\n    [case.each]\n    ^\n"
          "  keep long lists in a file beside the plan, or vary fewer values in [case.each]\n");
}
