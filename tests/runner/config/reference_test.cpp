// docs/plan.md and docs/rig.md hold the reference that the tables give. After a change of a table:
//
//     HALFLSB_UPDATE_DOCS=1 .build/release/tests/config_tests "[docs]"
#include "runner/config/reference.hpp"

#include <catch2/catch.hpp>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/rule.hpp"
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
