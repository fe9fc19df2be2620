// docs/plan.md and docs/rig.md hold the reference that the tables give. After a change of a table:
//
//     HALFLSB_UPDATE_DOCS=1 .build/release/tests/config_tests "[docs]"
#include "runner/config/reference.hpp"

#include <algorithm>
#include <catch2/catch.hpp>

#include "oracle/filters/filter.hpp"
#include "oracle/rules/rule.hpp"
#include "stimuli/stimulus.hpp"
#include "tests/support/config_texts.hpp"
#include "tests/support/generated_part.hpp"

using namespace halflsb;

namespace {

/// The text between ```toml and ``` after `heading`.
std::string sample_in(const std::string& page, const std::string& heading) {
    const std::string fence = "```toml\n";
    const std::size_t begin = page.find(fence, page.find(heading));
    REQUIRE(begin != std::string::npos);
    const std::size_t end = page.find("```", begin + fence.size());
    return page.substr(begin + fence.size(), end - begin - fence.size());
}

/// Every ```toml of the written part.
std::vector<std::string> samples_of(const std::string& page) {
    const std::string fence = "```toml\n", text = page.substr(0, page.find("<!-- generated"));
    std::vector<std::string> samples;
    for (std::size_t at = text.find(fence); at != std::string::npos; at = text.find(fence, at)) {
        at += fence.size();
        samples.push_back(text.substr(at, text.find("```", at) - at));
    }
    return samples;
}

/// The path in the comment that a sample of another file begins with, or "".
std::string named_file(const std::string& sample) {
    return sample.starts_with("# ") ? sample.substr(2, sample.find('\n') - 2) : std::string();
}

/// The page shows parts of a plan; what they leave out is nothing special.
std::string completed(const std::string& sample) {
    const auto says = [&](const std::string& word) { return sample.find(word) != std::string::npos; };
    std::string text = sample;
    if (says("title =")) return text;
    text.insert(0, "title = \"sample\"\n");
    if (says("include =")) return text;
    if (!says("[signal]"))
        text += "[signal]\nrate_hz = 1200.0\ninput = \"q15\"\noutput = \"q15\"\nunit = \"g\"\nfull_scale_unit = 6.0\n";
    if (!says("[[filter]]")) text += "[[filter]]\nkind = \"moving-average\"\npoints = 16\n";
    if (!says("rule]]")) text += "[[rule]]\nkind = \"error\"\nmax_ratio = 0.1\n";
    if (!says("[[case]]"))
        text += "[[case]]\nname = \"tare\"\n[case.stimulus]\nshape = \"step\"\nlength_samples = 64\n";
    return text;
}

}  // namespace

TEST_CASE("docs: the pages of the plan and the rig hold the reference of the tables", "[config][docs]") {
    test::check_generated_part("plan.md", "reference", plan_reference());
    test::check_generated_part("rig.md", "reference", rig_reference());
}

TEST_CASE("docs: the samples of the pages are good", "[config][docs]") {
    const Plan plan = plan_of(sample_in(test::page_text("plan.md"), "# The plan"));
    CHECK(plan.cases.size() == 2);
    const Rig rig = rig_of(sample_in(test::page_text("rig.md"), "# The rig"));
    CHECK(wants_image(rig));
    CHECK(rig.attempts == 2);
}

TEST_CASE("docs: every part of a plan that the page shows is good", "[config][docs]") {
    const std::vector<std::string> samples = samples_of(test::page_text("plan.md"));
    FakeFiles files;
    files.contents["./stimuli/belt.csv"] = "# rate_hz = 1200\ntime_s,raw\n0.000000,0.5\n0.000833,-1\n0.001667,2\n";
    files.contents["./firmware/settle.h"] = test::page_text("../rigs/filters/coefficients/settle.h");
    for (const std::string& sample : samples) {
        if (const std::string path = named_file(sample); !path.empty()) files.contents["./" + path] = sample;
    }
    std::vector<std::string> names;
    for (const std::string& sample : samples) {
        if (!named_file(sample).empty()) continue;
        INFO(sample);
        for (const Case& the_case : plan_of(completed(sample), files).cases) names.push_back(the_case.name);
    }
    const auto is_there = [&](const std::string& name) {
        return std::find(names.begin(), names.end(), name) != names.end();
    };
    // What the text says of them.
    CHECK(is_there("tare step, level_ratio 0.1, speed slow"));
    CHECK(is_there("tare step, level_ratio 1, speed fast"));
    CHECK(is_there("parcel and hum"));
    CHECK(samples.size() >= 10);
}

TEST_CASE("docs: the reference names every shape, filter, rule and key", "[config][docs]") {
    const std::string reference = plan_reference();
    for (const auto* recipes : {&stimulus_recipes(), &filter_recipes(), &rule_recipes()}) {
        REQUIRE(!recipes->empty());
        for (const Recipe& recipe : *recipes) {
            INFO(recipe.name);
            CHECK(reference.find("\"" + std::string(recipe.name) + "\"") != std::string::npos);
            CHECK(!recipe.help.empty());
            for (const Parameter& parameter : recipe.parameters) {
                INFO(parameter.name);
                CHECK(reference.find("| `" + std::string(parameter.name) + "` |") != std::string::npos);
                CHECK(!parameter.help.empty());
            }
        }
    }
}
