// Values that hold more than a number: lists of whole numbers, stimulus files, stimuli inside a stimulus.
#include "runner/config/nested_stimuli.hpp"

#include "stimuli/stimulus.hpp"
#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

/// A table [case.stimulus] of the text under that header, its reader, and all that they need.
struct Table {
    explicit Table(const std::string& lines, FakeFiles given = {})
        : source("plan.toml", "[case.stimulus]\n" + lines),
          files(std::move(given)),
          problems(source),
          context{problems, files, "root", 600.0, {}},
          tree(std::get<TomlValue>(parse_toml(source))),
          stimulus(tree.find("case")->value.find("stimulus")->value) {}

    ParameterValues read(const Recipe& recipe) {
        TableReader reader(context, stimulus, "[case.stimulus]");
        ParameterValues values = reader.parameters(recipe);
        reader.refuse_unknown_keys();
        return values;
    }
    std::string told() const { return joined(problems.sorted()); }

    SourceText source;
    FakeFiles files;
    Problems problems;
    ReadContext context;
    TomlValue tree;
    const TomlValue& stimulus;
};

const Recipe& outer_recipe() {
    static const Recipe recipe{
        "outer",
        "",
        {{.name = "parts", .type = ParameterType::stimuli, .help = "In order."},
         {.name = "add", .type = ParameterType::stimuli, .help = "Together."},
         {.name = "channels", .type = ParameterType::integers, .minimum = 1, .maximum = 16, .help = "Some."},
         {.name = "file", .type = ParameterType::signal_file, .unit = "characters", .maximum = 200, .help = "Samples."},
         {.name = "repeats", .type = ParameterType::integer, .help = "How often."}}};
    return recipe;
}

std::string told(int line, const std::string& shown, int column, const std::string& problem,
                 const std::string& remedy) {
    return "plan.toml:" + std::to_string(line) + ":" + std::to_string(column) + ": " + problem + "\n    " + shown +
           "\n    " + std::string(static_cast<std::size_t>(column) - 1, ' ') + "^\n  " + remedy + "\n";
}

}  // namespace

TEST_CASE("nested stimuli: in braces and under headers they are the same", "[config]") {
    Table inlined(
        "parts = [{ shape = \"step\", length_samples = 9 },\n  { shape = \"noise\", length_samples = 4, seed = 3 }]\n");
    Table headed(
        "repeats = 1\n[[case.stimulus.parts]]\nshape = \"step\"\nlength_samples = 9\n[[case.stimulus.parts]]\n"
        "shape = \"noise\"\nlength_samples = 4\nseed = 3\n");
    for (Table* table : {&inlined, &headed}) {
        const ParameterValues values = table->read(outer_recipe());
        CHECK(table->told().empty());
        const auto parts = values.stimuli("parts");
        REQUIRE(parts.size() == 2);
        CHECK(parts[0].shape == "step");
        CHECK(parts[0].values.integer(*find_recipe(stimulus_recipes(), "step"), "length_samples") == 9);
        CHECK(parts[1].shape == "noise");
        CHECK(parts[1].values.integer(*find_recipe(stimulus_recipes(), "noise"), "seed") == 3);
    }
}

TEST_CASE("nested stimuli: a length may be left out of what is added, not of a part", "[config]") {
    Table added("add = [{ shape = \"step\" }]\n");
    CHECK(added.read(outer_recipe()).stimuli("add").size() == 1);
    CHECK(added.told().empty());
    Table part("parts = [{ shape = \"step\" }]\n");
    part.read(outer_recipe());
    CHECK(part.told() ==
          told(2, "parts = [{ shape = \"step\" }]", 10, "parts[1] of shape \"step\" has no length_samples",
               "add length_samples: number of samples that are sent; a stimulus in add may leave it out"));
}

TEST_CASE("nested stimuli: each is as strict as one of its own", "[config]") {
    const auto refusal = [](const std::string& line, const std::string& at, const std::string& problem,
                            const std::string& remedy) {
        Table table(line + "\n");
        table.read(outer_recipe());
        CHECK(table.told() == told(2, line, static_cast<int>(line.find(at)) + 1, problem, remedy));
    };
    refusal("parts = []", "[]", "parts is empty", "give it at least one stimulus");
    refusal("parts = [7]", "7", "in parts stands a whole number, wanted tables",
            "write parts = [{ shape = \"step\", ... }, ...], or each under a header");
    refusal("parts = \"step\"", "\"step\"", "parts is the string \"step\", wanted a list of tables",
            "write parts = [{ shape = \"step\", length_samples = 100 }, ...]");
    refusal("add = [{ shape = \"step\" }, { shape = \"stop\" }]", "\"stop\"", "shape = \"stop\" is not known",
            "did you mean \"step\"?");
    refusal("add = [{ shape = \"step\", level_ratio = 2.0 }]", "2.0", "level_ratio = 2 is above 1",
            "give a number from -1 to 1 of full scale");
    refusal("add = [{ shape = \"step\", seed = 1 }]", "seed", "unknown key \"seed\" in add[1] of shape \"step\"", [] {
        std::string known = "known here: shape";
        const auto& parameters = find_recipe(stimulus_recipes(), "step")->parameters;
        for (std::size_t i = 0; i < parameters.size(); ++i)
            known += (i + 1 == parameters.size() ? " and " : ", ") + std::string(parameters[i].name);
        return known;
    }());
    // Under a header it may have been meant for the stimulus itself; in braces it cannot.
    Table headed("[[case.stimulus.add]]\nshape = \"step\"\nrepeats = 2\n");
    headed.read(outer_recipe());
    CHECK(headed.told() == told(4, "repeats = 2", 1, "\"repeats\" belongs to [case.stimulus], here it stands in add[1]",
                                "move the line up, to the other keys of [case.stimulus]"));
}

TEST_CASE("nested stimuli: what a maker blames is found at any depth", "[config]") {
    const std::string second = "  { shape = \"x\", add = [{ shape = \"y\", at_samples = 5 }] }]";
    Table table("parts = [{ shape = \"step\" },\n" + second + "\nchannels = [1, 2]\n");
    TableReader reader(table.context, table.stimulus, "[case.stimulus]");
    CHECK(reader.place_of("parts") == Place{2, 9});
    CHECK(reader.place_of("parts[1].shape") == Place{2, 20});
    CHECK(reader.place_of("parts[2]") == Place{3, 3});
    CHECK(reader.place_of("parts[2].add[1].at_samples") == Place{3, 53});
    // What is not there is blamed on the innermost table that is.
    CHECK(reader.place_of("parts[2].add[1].level_ratio") == Place{3, 25});
    CHECK(reader.place_of("parts[3].shape") == Place{2, 9});
    CHECK(reader.place_of("channels[2]") == Place{4, 12});
    CHECK(reader.place_of("none") == Place{1, 1});
    reader.refuse(
        {ErrorKind::input, "parts[2].add[1].at_samples", "at_samples = 5 is behind the end", "start earlier"});
    reader.refuse({ErrorKind::input, "parts[1].shape", "no such thing", "take another"});
    CHECK(table.told() ==
          told(2, "parts = [{ shape = \"step\" },", 20, "parts[1].shape: no such thing", "take another") +
              told(3, second, 53, "at_samples = 5 is behind the end", "start earlier"));
}

TEST_CASE("nested stimuli: --seed reaches them", "[config]") {
    Table table(
        "parts = [{ shape = \"noise\", length_samples = 4, seed = 3 }, { shape = \"step\", length_samples = 4 }]\n");
    ParameterValues values = table.read(outer_recipe());
    set_seeds(outer_recipe(), values, 77);
    const auto parts = values.stimuli("parts");
    REQUIRE(parts.size() == 2);
    CHECK(parts[0].values.integer(*find_recipe(stimulus_recipes(), "noise"), "seed") == 77);
    CHECK(!parts[1].values.has("seed"));
}

TEST_CASE("values: a list of whole numbers", "[config]") {
    Table good("channels = [1, 16]\n");
    CHECK(good.read(outer_recipe()).numbers("channels") == std::vector<double>{1.0, 16.0});
    const auto refusal = [](const std::string& line, const std::string& at, const std::string& problem,
                            const std::string& remedy) {
        Table table(line + "\n");
        table.read(outer_recipe());
        CHECK(table.told() == told(2, line, static_cast<int>(line.find(at)) + 1, problem, remedy));
    };
    refusal("channels = 1", "1", "channels is the whole number 1, wanted a list of whole numbers",
            "write channels = [1, 2]");
    refusal("channels = []", "[]", "channels is empty", "give it at least one number");
    refusal("channels = [1, 2.5]", "2.5", "channels[1] is the number 2.5, wanted a whole number",
            "write channels = [1, 2]");
    refusal("channels = [0]", "0", "channels[0] = 0 is below 1", "give a whole number from 1 to 16");
    refusal("channels = [17]", "17", "channels[0] = 17 is above 16", "give a whole number from 1 to 16");
}

TEST_CASE("values: a stimulus file under the root is read once, and refused at the key that names it", "[config]") {
    FakeFiles files;
    files.contents["root/in/w.csv"] = "time_s,raw\n0.000000,1\n0.000833,2\n0.001667,3\n";
    Table table("file = \"in/w.csv\"\n", files);
    const auto file = table.read(outer_recipe()).signal_file("file");
    REQUIRE(file != nullptr);
    CHECK(file->path == "in/w.csv");
    CHECK(file->rate_hz == 1200.0);
    CHECK(file->columns == std::vector<std::vector<double>>{{1.0, 2.0, 3.0}});
    CHECK(table.read(outer_recipe()).signal_file("file") == file);
    CHECK(table.files.read_paths.size() == 1);

    files.contents["root/bad.csv"] = "1\nx\n";
    Table bad("file = \"bad.csv\"\n", files);
    bad.read(outer_recipe());
    CHECK(bad.told() ==
          "root/bad.csv:2:1: \"x\" is not one number\n    x\n    ^\n  write the same count of numbers on "
          "every line, with a decimal point, between commas, semicolons or tabs\n");
    Table outside("file = \"../w.csv\"\n", files);
    outside.read(outer_recipe());
    CHECK(outside.told() == told(2, "file = \"../w.csv\"", 8, "file = \"../w.csv\": it lies outside the root root",
                                 "move the file under the root, or give another --root"));
    files.contents["root/large.csv"] = std::string((std::size_t{16} << 20) + 1, '1');
    Table large("file = \"large.csv\"\n", files);
    large.read(outer_recipe());
    CHECK(large.told() == told(2, "file = \"large.csv\"", 8,
                               "file = \"large.csv\": it has 16777217 bytes, the most allowed are 16777216; it was not "
                               "read",
                               "is it the file that was meant?"));
}
