#include "stimuli/values_check.hpp"

#include <catch2/catch.hpp>
#include <limits>

#include "make.hpp"
#include "stimuli/number_text.hpp"

using namespace halflsb;

namespace {

const Recipe recipe = {
    .name = "thing",
    .help = "A recipe with one parameter of each type.",
    .parameters =
        {
            {.name = "taps", .type = ParameterType::file, .unit = "", .minimum = -2.0, .maximum = 2.0, .help = "h"},
            {.name = "label", .type = ParameterType::text, .help = "h"},
            {.name = "rows", .type = ParameterType::sections, .help = "h"},
            {.name = "kind", .type = ParameterType::choice, .choices = {"first", "second"}, .help = "h"},
            {.name = "count", .type = ParameterType::integer, .default_value = 3.0, .help = "h"},
            {.name = "channels", .type = ParameterType::integers, .minimum = 1.0, .maximum = 16.0, .help = "h"},
            {.name = "gain", .type = ParameterType::real, .minimum = 0.0, .above_minimum = true, .help = "h"},
            {.name = "recording", .type = ParameterType::signal_file, .help = "h"},
            {.name = "parts", .type = ParameterType::stimuli, .help = "h"},
            {.name = "must", .type = ParameterType::real, .required = true, .help = "h"},
        },
};

std::string checked(std::string name, ParameterValue value) {
    ParameterValues values;
    values.set("must", 1.0);
    values.set(std::move(name), std::move(value));
    const auto error = misfit_of(recipe, values);
    return error ? to_text(*error) : "fits";
}

using Numbers = std::vector<double>;
using Rows = std::vector<std::vector<double>>;

}  // namespace

TEST_CASE("values check: each type takes its own values only", "[stimuli]") {
    CHECK(checked("taps", Numbers{1.0, -2.0}) == "fits");
    CHECK(checked("taps", Numbers{1.0, 2.5}) == "taps: 2.5 is above the largest, 2\n  give 2 or less");
    CHECK(checked("taps", Rows{{1.0}}) == "taps: needs a list of numbers");
    CHECK(checked("label", std::string("any")) == "fits");
    CHECK(checked("label", 1.0) == "label: needs a string");
    CHECK(checked("rows", Rows{{1.0}, {2.0, 3.0}}) == "fits");
    CHECK(checked("rows", Rows{}) == "rows: the list is empty\n  give at least one row");
    CHECK(checked("rows", Rows{{1.0}, {}}) == "rows: the list is empty\n  give at least one number");
    CHECK(checked("rows", Numbers{1.0}) == "rows: needs a list of lists of numbers");
    CHECK(checked("rows", Rows{{std::numeric_limits<double>::infinity()}}) ==
          "rows: inf is not finite\n  give a number");
    CHECK(checked("kind", std::string("second")) == "fits");
    CHECK(checked("kind", std::string("third")) == "kind: \"third\" is not a choice\n  choices: first, second");
    CHECK(checked("count", std::int64_t{7}) == "fits");
    CHECK(checked("count", 7.0) == "count: needs a whole number");
    CHECK(checked("must", std::int64_t{7}) == "fits");
    CHECK(misfit_of(recipe, {})->place == "must");
    CHECK(checked("channels", Numbers{1.0, 16.0}) == "fits");
    CHECK(checked("channels", Numbers{1.0, 17.0}) == "channels: 17 is above the largest, 16\n  give 16 or less");
    CHECK(checked("channels", Numbers{1.0, 2.5}) == "channels: 2.5 is no whole number\n  give whole numbers");
    CHECK(checked("channels", std::int64_t{1}) == "channels: needs a list of numbers");
    CHECK(checked("gain", 5e-324) == "fits");
    CHECK(checked("gain", 0.0) == "gain: 0 is not above 0\n  give more than 0");
    CHECK(checked("gain", std::int64_t{0}) == "gain: 0 is not above 0\n  give more than 0");
    CHECK(checked("gain", -0.0) == "gain: -0 is not above 0\n  give more than 0");
    CHECK(checked("recording", std::make_shared<const SignalFile>()) == "fits");
    CHECK(checked("recording", std::shared_ptr<const SignalFile>()) == "recording: needs the samples of a file");
    CHECK(checked("recording", std::string("a.csv")) == "recording: needs the samples of a file");
    CHECK(checked("parts", std::shared_ptr<const std::vector<StimulusWords>>()) == "parts: needs a list of stimuli");
    CHECK(checked("parts", Numbers{1.0}) == "parts: needs a list of stimuli");
    CHECK(checked("parts", list({words("step", {{"length_samples", std::int64_t{1}}})})) == "fits");
    CHECK(checked("parts", list({words("step", {{"length_samples", 1.0}})})) ==
          "parts[1].length_samples: needs a whole number");
}

TEST_CASE("parameter values: the plan's value, else the default, else nothing", "[stimuli]") {
    ParameterValues values;
    CHECK(values.integer(recipe, "count") == 3);
    CHECK(values.number(recipe, "count") == 3.0);
    CHECK(values.text(recipe, "kind") == "first");
    CHECK_FALSE(values.number(recipe, "must"));
    CHECK_FALSE(values.text(recipe, "label"));
    CHECK(values.numbers("taps").empty());
    CHECK(values.rows("rows").empty());
    CHECK_FALSE(values.has("count"));
    values.set("count", std::int64_t{5});
    values.set("kind", std::string("second"));
    values.set("taps", Numbers{1.0});
    values.set("rows", Rows{{1.0}});
    CHECK(values.has("count"));
    CHECK(values.integer(recipe, "count") == 5);
    CHECK(values.number(recipe, "count") == 5.0);
    CHECK(values.text(recipe, "kind") == "second");
    CHECK(values.numbers("taps") == Numbers{1.0});
    CHECK(values.rows("rows") == Rows{{1.0}});
    CHECK_FALSE(values.text(recipe, "count"));
    CHECK(values.numbers("count").empty());
    CHECK(values.all().size() == 4);
    CHECK(find_parameter(recipe, "nothing") == nullptr);
}

TEST_CASE("catalogue: every shape and parameter explains itself in one sentence", "[stimuli]") {
    std::vector<std::string_view> names;
    for (const Recipe& shape : stimulus_recipes()) {
        names.push_back(shape.name);
        CHECK(shape.help.back() == '.');
        CHECK(find_recipe(stimulus_recipes(), shape.name) == &shape);
        for (const Parameter& parameter : shape.parameters) {
            INFO(shape.name << " " << parameter.name);
            CHECK(parameter.help.size() > 10);
            CHECK(parameter.help.back() == '.');
            CHECK(parameter.minimum <= parameter.maximum);
            CHECK(find_parameter(shape, parameter.name) == &parameter);  // so no name stands twice
            if (parameter.default_value) {
                CHECK_FALSE(parameter.required);
                CHECK(*parameter.default_value >= parameter.minimum);
                CHECK(*parameter.default_value <= parameter.maximum);
            }
            CHECK(parameter.choices.empty() == (parameter.type != ParameterType::choice));
        }
    }
    CHECK(names == std::vector<std::string_view>{"step", "impulse", "silence", "ramp", "square", "signs", "chirp",
                                                 "noise", "prbs", "sine", "multitone", "burst", "file", "sequence"});
    CHECK(find_recipe(stimulus_recipes(), "nothing") == nullptr);
}

TEST_CASE("number text: the shortest that reads back", "[stimuli]") {
    CHECK(number_text(0.1) == "0.1");
    CHECK(number_text(48000.0) == "48000");
    CHECK(number_text(10'000'000'000.0) == "10000000000");
    CHECK(number_text(1.0 / 3.0) == "0.3333333333333333");
    CHECK(number_text(-1e-300) == "-1e-300");
}
