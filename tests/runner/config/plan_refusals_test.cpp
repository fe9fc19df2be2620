// Every refusal of a plan, whole. Where the words belong to another room (a stimulus, a filter, a rule),
// they are asked from there, and place, line, caret and remedy are held to them.
#include "runner/config/plan_words.hpp"
#include "stimuli/number_text.hpp"
#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

/// good_plan with `from` replaced by `to` must be refused by exactly that message.
void refused(const std::string& from, const std::string& to, int line, const std::string& at,
             const std::string& problem, const std::string& remedy) {
    const std::string text = with(good_plan, from, to);
    CHECK(plan_problems(text) == message(text, line, at, problem, remedy));
}

/// The words of a table, or the names of recipes, as a message lists them.
std::string listed(const std::vector<std::string>& words, const std::string& last) {
    std::string text;
    for (std::size_t i = 0; i < words.size(); ++i)
        text += (i == 0 ? "" : i + 1 == words.size() ? last : std::string(", ")) + words[i];
    return text;
}
std::vector<std::string> words_of(const Recipe& recipe) {
    std::vector<std::string> words;
    for (const Parameter& parameter : recipe.parameters) words.emplace_back(parameter.name);
    return words;
}
std::vector<std::string> names_of(const std::vector<Recipe>& recipes, const std::string& quotes = "") {
    std::vector<std::string> names;
    for (const Recipe& recipe : recipes) names.push_back(quotes + std::string(recipe.name) + quotes);
    return names;
}

constexpr const char* fir = "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n";

}  // namespace

TEST_CASE("plan: missing, folder, too large: refused unread, with the reason", "[config]") {
    FakeFiles files;
    const auto read = read_plan("none.toml", files);
    REQUIRE(std::holds_alternative<ReadProblems>(read));
    CHECK(joined(std::get<ReadProblems>(read)) ==
          "none.toml: there is no such file\n  check the path; it is taken from the current folder\n");
}

TEST_CASE("plan: the largest one is a byte below 1 MiB", "[config]") {
    FakeFiles files;
    const auto padded_to = [&](std::size_t bytes) {
        return good_plan + "#" + std::string(bytes - good_plan.size() - 1, 'x');
    };
    CHECK(plan_problems(padded_to((1U << 20) - 1)).empty());
    for (const std::size_t bytes : {std::size_t{1} << 20, (std::size_t{1} << 20) + 1}) {
        CHECK(plan_problems(padded_to(bytes)) ==
              "plan.toml: it has " + std::to_string(bytes) +
                  " bytes, the most allowed are 1048575; it was not read\n  is it the file that was meant?\n");
    }
}

TEST_CASE("plan: an empty one, and one of blanks", "[config]") {
    CHECK(plan_problems("") ==
          "plan.toml:1:1: the file is empty\n    \n    ^\n  docs/plan.md shows what belongs in it\n");
    CHECK(plan_problems(" \t\r\n\n") ==
          "plan.toml:1:1: the file is empty\n      \n    ^\n  docs/plan.md shows what belongs in it\n");
}

TEST_CASE("plan: one of comments lacks everything, said at once", "[config]") {
    const std::string line = "\n    # nothing\n    ^\n  ";
    CHECK(plan_problems("# nothing\n") ==
          "plan.toml:1:1: the file has no title" + line + "add title: what this plan accepts, for the report\n" +
              "plan.toml:1:1: the file has no [signal]" + line + "add it; docs/plan.md and docs/rig.md show how\n" +
              "plan.toml:1:1: the file has no [[filter]]" + line +
              "say what the firmware computes, at least one stage\n");
}

TEST_CASE("plan: bytes that are no text", "[config]") {
    CHECK(plan_problems(with(good_plan, "CW-7", "CW\xE9")) ==
          "plan.toml:1:12: the byte \\xe9 is not UTF-8\n    title = \"CW\\xe9 load cell\"\n               ^\n  save it "
          "as UTF-8 text\n");
    CHECK(
        plan_problems(std::string("title\0= 1", 9)) ==
        "plan.toml:1:6: a NUL byte; this is not a text file\n    title\\x00= 1\n         ^\n  save it as UTF-8 text\n");
}

TEST_CASE("plan: an unknown key is refused with the nearest known one", "[config]") {
    refused("max_lsb", "max_lbs", 16, "max_lbs", "unknown key \"max_lbs\" in [[rule]] of kind \"error\"",
            "did you mean max_lsb?");
    refused("seed = 7", "sed = 7", 23, "sed", "unknown key \"sed\" in [case.stimulus] of shape \"noise\"",
            "did you mean seed?");
    refused("unit = \"g\"", "units = \"g\"", 7, "units", "unknown key \"units\" in [signal]", "did you mean unit?");
    refused("[[rule]]", "[[rules]]", 14, "rules", "unknown key \"rules\" in the file", "did you mean rule?");
    refused("unit = \"g\"", "colour = \"g\"", 7, "colour", "unknown key \"colour\" in [signal]",
            "known here: " + listed(words_of(signal_recipe()), " and "));
    // A key that could drive a terminal.
    refused("unit = \"g\"", "\"a\\u001b[2J\" = 1", 7, "\"a", "unknown key \"a\\x1b[2J\" in [signal]",
            "known here: " + listed(words_of(signal_recipe()), " and "));
}

TEST_CASE("plan: a limit is a number or the word derived", "[config]") {
    CHECK(plan_problems(with(good_plan, "max_lsb = 1.5", "max_lsb = \"derived\"")).empty());
    refused("max_lsb = 1.5", "max_lsb = \"derive\"", 16, "\"derive\"", "max_lsb = \"derive\" is not known",
            "did you mean \"derived\"?");
    refused("max_lsb = 1.5", "max_lsb = \"guess\"", 16, "\"guess\"", "max_lsb = \"guess\" is not known",
            "give \"derived\"");
}

TEST_CASE("plan: arithmetic that cannot be is refused at its word, the stage's own or that of every stage",
          "[config]") {
    const std::string words = "[filter.arithmetic]\n";
    refused("taps = [0.25, 0.5, 0.25]", "taps = [0.25, 0.5, 0.25]\n" + words + "state_bits = 32", 14, "32",
            "state_bits says nothing of a fir", "leave it out");
}

TEST_CASE("plan: a wrong type says what was found and what is wanted", "[config]") {
    refused("title = \"CW-7 load cell\"", "title = 7", 1, "7", "title is the whole number 7, wanted a string",
            "write title = \"...\"");
    refused("rate_hz = 1200.0", "rate_hz = \"1200\"", 4, "\"1200\"", "rate_hz is the string \"1200\", wanted a number",
            "write rate_hz = 0.5, without quotation marks");
    refused("rate_hz = 1200.0", "rate_hz = true", 4, "true", "rate_hz is true, wanted a number",
            "write rate_hz = 0.5, without quotation marks");
    refused("rate_hz = 1200.0", "rate_hz = 2026-12-01", 4, "2026", "rate_hz is a date or time, wanted a number",
            "write rate_hz = 0.5, without quotation marks");
    refused("input = \"q15\"", "input = 15", 5, "15", "input is the whole number 15, wanted a string",
            "write input = \"q15\"");
    refused("length_samples = 4096", "length_samples = 4096.0", 22, "4096.0",
            "length_samples is the number 4096.0, wanted a whole number",
            "write length_samples = 16, without a decimal point and without quotation marks");
    refused("taps = [0.25, 0.5, 0.25]", "taps = 0.25", 12, "0.25", "taps is the number 0.25, wanted a list of numbers",
            "write taps = [0.25, 0.5, 0.25]");
    refused("taps = [0.25, 0.5, 0.25]", "taps = [0.25, \"0.5\", 0.25]", 12, "\"0.5\"",
            "taps[1] is the string \"0.5\", wanted a number", "write taps = [0.25, 0.5, 0.25]");
    refused(fir, "kind = \"biquad-cascade\"\nsections = [1.0, 0.0]\n", 12, "1.0",
            "sections[0] is the number 1.0, wanted a list of numbers",
            "write sections = [[b0, b1, b2, a1, a2], ...], with numbers");
    refused("taps = [0.25, 0.5, 0.25]", "taps_file = [1]", 12, "[1]", "taps_file is a list, wanted the name of a file",
            "write taps_file = \"taps.txt\", a path under the root");
    refused("bands = [{ from_hz = 10.0, to_hz = 100.0, min_db = -3, max_db = 1 }]", "bands = 3", 26, "3",
            "bands is the whole number 3, wanted a list of tables",
            "write bands = [{ from_hz = 0.0, to_hz = 50.0, min_db = -1.0, max_db = 1.0 }, ...]");
    refused("bands = [{ from_hz = 10.0, to_hz = 100.0, min_db = -3, max_db = 1 }]", "bands = [3]", 26, "3",
            "in bands stands a whole number, wanted tables",
            "write { from_hz = 0.0, to_hz = 50.0, min_db = -1.0, max_db = 1.0 }");
}

TEST_CASE("plan: one table where a list is wanted, a list where one table is", "[config]") {
    refused("[[filter]]", "[filter]", 10, "[filter]", "filter is a table, wanted a list of tables",
            "write each under the header [[filter]]");
    refused("[signal]", "[[signal]]", 3, "[[signal]]", "signal is a list, wanted one table",
            "write it under the header [signal]");
    refused("[[case.rule]]", "[case.rule]", 24, "[case.rule]", "rule is a table, wanted a list of tables",
            "write each under the header [[case.rule]]");
    CHECK(plan_problems(with(good_plan, "[[filter]]\n" + std::string(fir), "") + "")
              .starts_with("plan.toml:1:1: the file has no [[filter]]\n"));
}

TEST_CASE("plan: a number that is none, or out of its range", "[config]") {
    refused("max_lsb = 1.5", "max_lsb = nan", 16, "nan", "max_lsb = nan is no finite number",
            "give a number of at least 0 LSB");
    refused("max_lsb = 1.5", "max_lsb = inf", 16, "inf", "max_lsb = inf is no finite number",
            "give a number of at least 0 LSB");
    refused("max_lsb = 1.5", "max_lsb = -inf", 16, "-inf", "max_lsb = -inf is no finite number",
            "give a number of at least 0 LSB");
    refused("max_lsb = 1.5", "max_lsb = -0.5", 16, "-0.5", "max_lsb = -0.5 is below 0",
            "give a number of at least 0 LSB");
    refused("rate_hz = 1200.0", "rate_hz = 0", 4, "0", "rate_hz = 0 is below 1e-06",
            "give a number from 1e-06 to 1000000000 Hz");
    refused("rate_hz = 1200.0", "rate_hz = 1.1e9", 4, "1.1e9", "rate_hz = 1100000000 is above 1000000000",
            "give a number from 1e-06 to 1000000000 Hz");
    refused("length_samples = 256", "length_samples = 256\nlevel_ratio = 1.01", 33, "1.01",
            "level_ratio = 1.01 is above 1", "give a number from -1 to 1 of full scale");
    refused(fir, "kind = \"moving-average\"\npoints = 0\n", 12, "0", "points = 0 is below 1",
            "give a whole number from 1 to 65536 samples");
    refused("taps = [0.25, 0.5, 0.25]", "taps = []", 12, "[]", "taps is empty", "give it at least one number");
    refused(fir, "kind = \"biquad-cascade\"\nsections = []\n", 12, "[]", "sections is empty",
            "give it at least one section");
    refused("full_scale_unit = 6000.0", "full_scale_unit = 0", 8, "0", "full_scale_unit is 0",
            "give a number other than 0, or leave it out");
    refused("taps = [0.25, 0.5, 0.25]", "taps = [0.25, 0.5, nan]", 12, "nan", "taps[2] = nan is no finite number",
            "give a number from -1000000000 to 1000000000");
}

TEST_CASE("plan: a number just inside its range is taken", "[config]") {
    CHECK(plan_problems(with(good_plan, "max_lsb = 1.5", "max_lsb = 0")).empty());
    CHECK(plan_problems(with(good_plan, "length_samples = 256", "length_samples = 256\nlevel_ratio = 1.0")).empty());
    CHECK(plan_problems(with(good_plan, "length_samples = 256", "length_samples = 256\nlevel_ratio = -1")).empty());
    CHECK(plan_problems(with(good_plan, "max_lsb = 1.5", "max_lsb = 32768")).empty());
}

TEST_CASE("plan: text that cannot be shown, is empty or too long", "[config]") {
    refused("name = \"tare step\"", "name = \"\"", 29, "\"\"", "name is empty", "give it at least one character");
    refused("name = \"tare step\"", "name = \"tare\\nstep\"", 29, "\"tare",
            "name = \"tare\\x0astep\" holds a control character", "use characters that can be seen, in one line");
    refused("name = \"tare step\"", "name = \"tare\\u202estep\"", 29, "\"tare",
            "name = \"tare\\u202estep\" holds a control character", "use characters that can be seen, in one line");
    refused("name = \"tare step\"", "name = \"" + std::string(81, 'x') + "\"", 29, "\"x", "name has 81 characters",
            "give at most 80");
    CHECK(plan_problems(with(good_plan, "tare step", std::string(80, 'x'))).empty());
}

TEST_CASE("plan: a word that is not among the choices", "[config]") {
    refused("shape = \"step\"", "shape = \"stop\"", 31, "\"stop\"", "shape = \"stop\" is not known",
            "did you mean \"step\"?");
    refused("kind = \"fir\"", "kind = \"fri\"", 11, "\"fri\"", "kind = \"fri\" is not known", "did you mean \"fir\"?");
    refused("kind = \"fir\"", "kind = \"wavelet\"", 11, "\"wavelet\"", "kind = \"wavelet\" is not known",
            "give " + listed(names_of(filter_recipes(), "\""), " or "));
    refused("input = \"q15\"", "input = \"q51\"", 5, "\"q51\"", "input = \"q51\" is not known",
            "did you mean \"q15\"?");
    refused("name = \"tare step\"", "name = \"tare step\"\nstart = \"warm\"", 30, "\"warm\"",
            "start = \"warm\" is not known", "give \"reset\", \"flush\" or \"running\"");
}

TEST_CASE("plan: a missing key is told at its header", "[config]") {
    refused("rate_hz = 1200.0\n", "", 3, "[signal]", "[signal] has no rate_hz",
            "add rate_hz: samples per second of the filter");
    refused("name = \"tare step\"\n", "", 28, "[[case]]", "[[case]] has no name",
            "add name: what --case and the report call it; each case has its own");
    refused("kind = \"fir\"\n", "", 10, "[[filter]]", "[[filter]] has no kind",
            "add kind = one of: " + listed(names_of(filter_recipes()), " or "));
    refused("shape = \"step\"\n", "", 30, "[case.stimulus]", "[case.stimulus] has no shape",
            "add shape = one of: " + listed(names_of(stimulus_recipes()), " or "));
    refused("[case.stimulus]\nshape = \"step\"\nlength_samples = 256\n", "", 28, "[[case]]",
            "[[case]] has no [case.stimulus]", "add it; docs/plan.md and docs/rig.md show how");
    refused("length_samples = 256\n", "", 30, "[case.stimulus]",
            "[case.stimulus] of shape \"step\" has no length_samples",
            "add length_samples: number of samples that are sent; a stimulus in add may leave it out");
}

TEST_CASE("plan: a plan without any rule judges nothing", "[config]") {
    const std::string text = with(
        with(good_plan, "[[rule]]\nkind = \"error\"\nmax_lsb = 1.5\n", ""),
        "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 10.0, to_hz = 100.0, min_db = -3, max_db = 1 }]\n",
        "");
    CHECK(plan_problems(text) == message(text, 1, "title", "the file has no rule, so it judges nothing",
                                         "add a [[rule]] for every case, or a [[case.rule]] to one"));
}

TEST_CASE("plan: a key under the wrong header is told where it belongs", "[config]") {
    const std::string text =
        with(with(good_plan, "title = \"CW-7 load cell\"\n", ""), "[signal]\n", "[signal]\ntitle = \"late\"\n");
    CHECK(plan_problems(text) ==
          "plan.toml:1:1: the file has no title\n    \n    ^\n  add title: what this plan accepts, for the report\n" +
              message(text, 3, "title", "\"title\" belongs to the top of the file, here it stands in [signal]",
                      "move the line above the first header"));
    refused("length_samples = 256\n", "length_samples = 256\nstart = \"reset\"\n", 33, "start",
            "\"start\" belongs to [[case]], here it stands in [case.stimulus]",
            "move the line up, to the other keys of [[case]]");
}

TEST_CASE("plan: a stimulus after a rule of the same case", "[config]") {
    const std::string text = good_plan.substr(0, good_plan.find("[case.stimulus]")) +
                             "[[case.rule]]\nkind = \"error\"\nmax_lsb = 1\n" +
                             "[case.stimulus]\nshape = \"step\"\nlength_samples = 9\n";
    CHECK(plan_problems(text) ==
          message(
              text, 23, "[case.stimulus]", "a stimulus after a rule of the same case: is a [[case]] missing above it?",
              "start the next case with [[case]] and its name; within a case the stimulus stands before the rules"));
}

TEST_CASE("plan: two cases of one name", "[config]") {
    refused("name = \"tare step\"", "name = \"belt noise\"", 29, "\"belt noise\"",
            "two cases are called \"belt noise\", the other one in line 19",
            "give each case a name of its own; --case chooses by it");
}

TEST_CASE("plan: formats of two kinds need to say what gain 1 is, those of one must not", "[config]") {
    refused("output = \"q15\"", "output = \"i16\"", 6, "\"i16\"",
            "q15 in and i16 out are of different kinds, so nothing says what gain 1 is",
            "add output_per_input: the value of the output format that stands for the value 1 of the input format");
    CHECK(plan_of(with(good_plan, "output = \"q15\"", "output = \"i16\"\noutput_per_input = 32768"))
              .signal.output_per_input == 32768.0);
    refused("unit = \"g\"", "output_per_input = 2", 7, "2",
            "output_per_input has no meaning with q15 in and q15 out, values of one kind",
            "leave it out; a gain belongs in the filter");
    CHECK(plan_problems(with(good_plan, "output = \"q15\"", "output = \"q31\"")).empty());
}

TEST_CASE("plan: what a shape, a filter or a rule refuses is told at its key", "[config]") {
    const StimulusContext q15{1200.0, *sample_format("q15")};
    const auto shown = [](const Error& error) {
        return (error.problem.find(error.place) == std::string::npos ? error.place + ": " : "") + error.problem;
    };
    SECTION("a frequency above Nyquist") {
        ParameterValues values;
        values.set("frequency_hz", 600.5);
        values.set("length_samples", std::int64_t{256});
        const Error error = make_stimulus("sine", values, q15).error();
        CHECK(error.place == "frequency_hz");
        refused("shape = \"step\"", "shape = \"sine\"\nfrequency_hz = 600.5", 32, "600.5", shown(error), error.remedy);
    }
    SECTION("a start behind the end") {
        ParameterValues values;
        values.set("at_samples", std::int64_t{256});
        values.set("length_samples", std::int64_t{256});
        const Error error = make_stimulus("step", values, q15).error();
        REQUIRE(error.place == "at_samples");
        refused("length_samples = 256", "length_samples = 256\nat_samples = 256", 33, "256", shown(error),
                error.remedy);
    }
    SECTION("codes for a format without an LSB") {
        ParameterValues values;
        values.set("level_codes", std::int64_t{5});
        values.set("length_samples", std::int64_t{256});
        const Error error = make_stimulus("step", values, {1200.0, *sample_format("f32")}).error();
        REQUIRE(error.place == "level_codes");
        std::string text = with(good_plan, "length_samples = 256", "length_samples = 256\nlevel_codes = 5");
        text = with(with(text, "input = \"q15\"", "input = \"f32\""), "unit = \"g\"", "output_per_input = 1");
        CHECK(plan_problems(text) == message(text, 33, "5", shown(error), error.remedy));
    }
    SECTION("an unstable section") {
        ParameterValues values;
        values.set("sections", std::vector<std::vector<double>>{{1.0, 0.0, 0.0, -2.1, 1.05}});
        const Error error = make_stage("biquad-cascade", values).error();
        REQUIRE(error.place == "sections");
        refused(fir, "kind = \"biquad-cascade\"\nsections = [[1, 0, 0, -2.1, 1.05]]\n", 12, "[[1", shown(error),
                error.remedy);
    }
    SECTION("a limit wider than full scale, in LSB, as a ratio and in the unit") {
        const RuleContext context{1200.0, true, 32768.0, 6000.0};
        for (const auto& [name, number] :
             {std::pair{"max_lsb", 32768.5}, std::pair{"rms_ratio", 1.001}, std::pair{"bias_unit", 6001.0}}) {
            ParameterValues values;
            values.set(name, number);
            const Error error = make_rule("error", values, context).error();
            REQUIRE(error.place == name);
            refused("max_lsb = 1.5", std::string(name) + " = " + number_text(number), 16, number_text(number),
                    shown(error), error.remedy);
        }
    }
    SECTION("a limit in LSB of an f32 output, a limit in a unit that nothing defines") {
        ParameterValues in_lsb, in_unit;
        in_lsb.set("max_lsb", 1.5);
        in_unit.set("max_unit", 1.5);
        const Error no_lsb = make_rule("error", in_lsb, {1200.0, false, 0.0, 6000.0}).error();
        std::string text =
            with(with(good_plan, "output = \"q15\"", "output = \"f32\""), "unit = \"g\"", "output_per_input = 1");
        CHECK(plan_problems(text) == message(text, 16, "1.5", shown(no_lsb), no_lsb.remedy));
        const Error no_unit = make_rule("error", in_unit, {1200.0, true, 32768.0, std::nullopt}).error();
        text = with(with(good_plan, "full_scale_unit = 6000.0\n", "\n"), "max_lsb = 1.5", "max_unit = 1.5");
        CHECK(plan_problems(text) == message(text, 16, "1.5", shown(no_unit), no_unit.remedy));
    }
    SECTION("an error rule without a limit, at its kind") {
        const Error error = make_rule("error", {}, {1200.0, true, 32768.0, 6000.0}).error();
        refused("max_lsb = 1.5", "", 15, "\"error\"", shown(error), error.remedy);
    }
}

TEST_CASE("plan: a second latency rule in one list", "[config]") {
    const std::string rule = "[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\n";
    const std::string text = with(good_plan, "[[case.rule]]\n", rule + rule + "[[case.rule]]\n");
    CHECK(plan_problems(text) == message(text, 27, "[[case.rule]]", "a second latency rule, beside the one in line 24",
                                         "a response has one latency; keep one of the two"));
}

TEST_CASE("plan: bands are checked one by one and against each other", "[config]") {
    const std::string bands = "bands = [{ from_hz = 10.0, to_hz = 100.0, min_db = -3, max_db = 1 }]";
    refused(bands, "bands = []", 26, "[]", "bands is empty", "give at least one { from_hz, to_hz, min_db or max_db }");
    refused(bands, "bands = [{ from_hz = 10.0, to_hz = 9.5, max_db = 1 }]", 26, "10.0",
            "the band 10 to 9.5 Hz runs backwards", "exchange from_hz and to_hz");
    refused(bands, "bands = [{ from_hz = 10.0, to_hz = 600.5, max_db = 1 }]", 26, "600.5",
            "the band 10 to 600.5 Hz ends above Nyquist, 600 Hz", "end it at 600 Hz or below, or correct rate_hz");
    refused(bands, "bands = [{ from_hz = 10.0, to_hz = 100.0 }]", 26, "{", "the band 10 to 100 Hz has no limit",
            "give min_db, max_db or both");
    refused(bands, "bands = [{ from_hz = 10.0, to_hz = 100.0, min_db = 2, max_db = 1 }]", 26, "2,",
            "the limits cross: min_db = 2 is above max_db = 1", "exchange them");
    refused(bands, "bands = [{ from_hz = -1, to_hz = 100.0, max_db = 1 }]", 26, "-1", "from_hz = -1 is below 0",
            "give a number of at least 0 Hz");
    refused(bands, "bands = [{ to_hz = 100.0, max_db = 1 }]", 26, "{", "a band has no from_hz",
            "add from_hz: lower edge");
    refused(bands, "bands = [{ from_hz = 10.0, to_hz = 100.0, mindb = -3 }]", 26, "mindb",
            "unknown key \"mindb\" in a band", "did you mean min_db?");
    refused(
        bands, "bands = [{ from_hz = 10, to_hz = 100, min_db = -3 },{ from_hz = 50, to_hz = 200, max_db = -4 }]", 26,
        "{ from_hz = 50",
        "this band and the one in line 26 contradict each other from 50 to 100 Hz: at least -3 dB and at most -4 dB",
        "both edges belong to a band; move the bands apart, or correct a limit");
    refused(bands, "bands = [{ from_hz = 10, to_hz = 100, min_db = -3 },{ from_hz = 100, to_hz = 200, max_db = -4 }]",
            26, "{ from_hz = 100",
            "this band and the one in line 26 contradict each other at 100 Hz: at least -3 dB and at most -4 dB",
            "both edges belong to a band; move the bands apart, or correct a limit");
    CHECK(plan_problems(
              with(good_plan, bands,
                   "bands = [{ from_hz = 10, to_hz = 100, min_db = -3 },{ from_hz = 50, to_hz = 600, max_db = 3 }]"))
              .empty());
}

TEST_CASE("plan: a rule that the stimulus cannot answer is refused with the judge's reason", "[config]") {
    // The words are those of judge/admission; here they must stand at the rule, with a remedy.
    const std::string response =
        "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 10.0, to_hz = 100.0, max_db = 3 }]\n";
    const std::string step = plan_problems(good_plan + response);
    CHECK(step.starts_with("plan.toml:33:1: case \"tare step\" cannot answer a response rule"));
    CHECK(step.find("\n    [[case.rule]]\n    ^\n  ") != std::string::npos);
    CHECK(step.find("noise") != std::string::npos);
    const std::string narrow =
        plan_problems(with(good_plan, "from_hz = 10.0, to_hz = 100.0", "from_hz = 10.0, to_hz = 10.1"));
    CHECK(narrow.starts_with(
        "plan.toml:24:1: the stimulus of case \"belt noise\" says nothing about the band 10 to 10.1 Hz\n"));
    const std::string silent =
        good_plan + "level_ratio = 0.0\n[[case.rule]]\nkind = \"latency\"\nlatency_samples = 0\n";
    CHECK(plan_problems(silent).starts_with("plan.toml:34:1: case \"tare step\" cannot tell its latency"));
}

TEST_CASE("plan: a latency rule for every case that no case can tell", "[config]") {
    const std::string cases = good_plan.substr(0, good_plan.find("[[case]]"));
    const std::string text =
        cases +
        "[[rule]]\nkind = \"latency\"\nlatency_samples = 1\n[[case]]\nname = \"silence\"\n[case.stimulus]\nshape = "
        "\"step\"\nlevel_ratio = 0.0\nlength_samples = 256\n";
    CHECK(plan_problems(text) == message(text, 18, "[[rule]]", "no case of this plan can tell its latency",
                                         "add a case with noise (shape = \"noise\", level_ratio = 0.5, length_samples "
                                         "= 4096), or leave the rule out"));
}

TEST_CASE("plan: a file that it names is confined, and its own lines are shown", "[config]") {
    FakeFiles files;
    const std::string named = with(good_plan, "taps = [0.25, 0.5, 0.25]", "taps_file = \"taps.txt\"");
    const auto said = [&](const std::string& bytes) {
        files.contents["./taps.txt"] = bytes;
        return plan_problems(named, files);
    };
    CHECK(said("1\n").empty());
    const std::string remedy =
        "  write one number a line, or the same count on every line between commas; with a decimal point; # starts a "
        "comment\n";
    CHECK(
        said("0.5\n 0,25\n") ==
        "./taps.txt:2:2: \"0,25\" is not one number: has it a decimal comma?\n     0,25\n     ^\n  write numbers with "
        "a decimal point, 0.5\n");
    CHECK(said("0.5 0.25\n").empty());
    CHECK(said("0x10\n") == "./taps.txt:1:1: \"0x10\" is not one number\n    0x10\n    ^\n" + remedy);
    CHECK(said("+-1\n") == "./taps.txt:1:1: \"+-1\" is not one number\n    +-1\n    ^\n" + remedy);
    CHECK(said("nan\n") == "./taps.txt:1:1: \"nan\" is no finite number\n    nan\n    ^\n" + remedy);
    CHECK(said("1e400\n") == "./taps.txt:1:1: \"1e400\" is not one number\n    1e400\n    ^\n" + remedy);
    CHECK(said("0.5\n2e9\n") ==
          "./taps.txt:2:1: 2000000000 is no coefficient\n    2e9\n    ^\n  give numbers from -1000000000 to "
          "1000000000\n");
    CHECK(said("# none\n") == "./taps.txt:1:1: there is no number in the file\n    # none\n    ^\n" + remedy);
    CHECK(said("") == "./taps.txt:1:1: there is no number in the file\n    \n    ^\n" + remedy);
    CHECK(said("1\n\xFF\n") ==
          "./taps.txt:2:1: the byte \\xff is not UTF-8\n    \\xff\n    ^\n  save it as UTF-8 text\n");
    refused("taps = [0.25, 0.5, 0.25]", "taps_file = \"none.txt\"", 12, "\"none.txt\"",
            "taps_file = \"none.txt\": there is no such file", "paths in a plan are taken from the root .");
    for (const std::string path : {"../taps.txt", "/etc/passwd", "a/../../taps.txt"}) {
        refused("taps = [0.25, 0.5, 0.25]", "taps_file = \"" + path + "\"", 12, "\"" + path,
                "taps_file = \"" + path + "\": it lies outside the root .",
                "move the file under the root, or give another --root");
    }
}

TEST_CASE("plan: all problems are said at once, in the order of the lines", "[config]") {
    std::string text = with(good_plan, "rate_hz = 1200.0", "rate_hz = \"fast\"");
    text = with(text, "max_lsb = 1.5", "max_lbs = 1.5");
    text = with(text, "taps = [0.25, 0.5, 0.25]", "taps = []");
    text = with(text, "name = \"tare step\"", "nmae = 3");
    text = with(text, "seed = 7", "seed = -1");
    const std::string said = plan_problems(text);
    std::size_t at = 0;
    for (const char* place : {"plan.toml:4:11: rate_hz is", "plan.toml:12:8: taps is empty",
                              "plan.toml:16:1: unknown key", "plan.toml:23:8: seed = -1 is below 0",
                              "plan.toml:28:1: [[case]] has no name", "plan.toml:29:1: unknown key \"nmae\""}) {
        const std::size_t found = said.find(place);
        INFO(place);
        INFO(said);
        CHECK(found != std::string::npos);
        CHECK(found >= at);
        at = found;
    }
    CHECK(std::count(said.begin(), said.end(), '\n') == 6 * 4);
}
