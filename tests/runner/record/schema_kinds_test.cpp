// docs/run.schema.json is written by hand: it must know every kind of rule.
#include <catch2/catch.hpp>
#include <fstream>
#include <nlohmann/json.hpp>
#include <set>

#include "oracle/rules/rule.hpp"
#include "tests/support/source_dir.hpp"

using namespace halflsb;

TEST_CASE("run.schema.json has the kinds of rule that there are, and no other", "[record]") {
    std::ifstream file(test::source_path("docs/run.schema.json"));
    const auto schema = nlohmann::json::parse(file);
    std::set<std::string> known, written;
    for (const Recipe& recipe : rule_recipes()) known.insert(std::string(recipe.name));
    for (const auto& kind : schema["$defs"]["rule"]["properties"]["kind"]["enum"])
        written.insert(kind.get<std::string>());
    CHECK(written == known);
}
