// docs/plan.md and docs/rig.md hold the reference that the tables give. After a change of a table:
//
//     HALFLSB_UPDATE_DOCS=1 .build/release/tests/config_tests "[docs]"
#include "runner/config/reference.hpp"

#include <catch2/catch.hpp>
#include <cstdlib>
#include <fstream>

#include "oracle/filters/filter.hpp"
#include "oracle/judge/rule.hpp"
#include "stimuli/stimulus.hpp"
#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

std::string page_text(const std::string& path) {
    std::ifstream file(path, std::ios::binary);
    return {std::istreambuf_iterator<char>(file), {}};
}

void check_page(const std::string& name, const std::string& reference) {
    const std::string path = std::string(HALFLSB_SOURCE_DIR) + "/docs/" + name;
    if (std::getenv("HALFLSB_UPDATE_DOCS") != nullptr) {
        const std::string renewed = with_reference(page_text(path), reference);
        std::ofstream(path, std::ios::binary) << renewed;
    }
    const std::string page = page_text(path);
    INFO("renew it with HALFLSB_UPDATE_DOCS=1");
    CHECK(page.find(reference) != std::string::npos);
    CHECK(page == with_reference(page, reference));
}

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
    check_page("plan.md", plan_reference());
    check_page("rig.md", rig_reference());
}

TEST_CASE("docs: the samples of the pages are good", "[config][docs]") {
    const std::string root = std::string(HALFLSB_SOURCE_DIR) + "/docs/";
    const Plan plan = plan_of(sample_in(page_text(root + "plan.md"), "# The plan"));
    CHECK(plan.cases.size() == 2);
    const Rig rig = rig_of(sample_in(page_text(root + "rig.md"), "# The rig"));
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

TEST_CASE("docs: only what stands between the markers is replaced", "[config][docs]") {
    const std::string page =
        "a\n<!-- reference: written by tests/runner/config/reference_test.cpp -->\nold\n<!-- end of reference -->\nb\n";
    CHECK(with_reference(page, "new\n") ==
          "a\n<!-- reference: written by tests/runner/config/reference_test.cpp -->\n\nnew\n<!-- end of reference "
          "-->\nb\n");
    CHECK(with_reference("no markers", "new\n") == "no markers");
}
