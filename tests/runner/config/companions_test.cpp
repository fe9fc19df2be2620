// Rules that have a case sent once more, as the reader understands them.
#include <algorithm>

#include "runner/config/resolved_plan.hpp"
#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

std::vector<std::string> names_of(const Plan& plan) {
    std::vector<std::string> names;
    for (const Case& the_case : plan.cases) names.push_back(the_case.name);
    return names;
}

const std::string shift_text = "[[case.rule]]\nkind = \"shift\"\nby_samples = [1, 3]\n";

}  // namespace

TEST_CASE("companions stand behind their bases, for a rule of a case and for one of all", "[config]") {
    const Plan plan =
        plan_of(with(good_plan, "max_lsb = 1.5\n", "max_lsb = 1.5\n[[rule]]\nkind = \"repeat\"\n") + shift_text);
    CHECK(names_of(plan) == std::vector<std::string>{"belt noise", "belt noise [repeat]", "tare step",
                                                     "tare step [shift 1]", "tare step [shift 3]",
                                                     "tare step [repeat]"});
    CHECK(plan.cases[0].has_companions);
    CHECK(plan.cases[4].companion->base == "tare step");
    CHECK(plan.cases[4].companion->terms == std::vector<CompanionTerm>{{1, 3}});
    CHECK(plan.cases[4].rules.size() == 1);
    // No companion is held to a latency that nobody asked for.
    for (const Case& the_case : plan.cases) CHECK(the_case.rules.empty() == false);
}

TEST_CASE("companions of an unknown filter are judged, and its case may have no other rule", "[config]") {
    const std::string filter = "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n";
    std::string text = with(good_plan, filter, "kind = \"unknown\"\n");
    text = with(text, "[[rule]]\nkind = \"error\"\nmax_lsb = 1.5\n", "[[rule]]\nkind = \"repeat\"\n");
    text = with(
        text,
        "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 10.0, to_hz = 100.0, min_db = -3, max_db = 1 }]\n",
        "[[case.rule]]\nkind = \"linearity\"\nmax_lsb = 2\n");
    const Plan plan = plan_of(text);
    CHECK(names_of(plan) == std::vector<std::string>{"belt noise", "belt noise [linearity -1]", "belt noise [repeat]",
                                                     "tare step", "tare step [repeat]"});
}

TEST_CASE("companions: two of one name are refused", "[config]") {
    const std::string twice = good_plan + shift_text + "[[case.rule]]\nkind = \"shift\"\n";
    CHECK(plan_problems(twice) ==
          message(
              twice, 36, "[[case.rule]]",
              "what this rule sends again is called \"tare step [shift 1]\", and so is another case or another rule's",
              "rename that case, or keep one of the two rules"));
    const std::string taken = with(good_plan + shift_text, "\"belt noise\"", "\"tare step [shift 3]\"");
    CHECK(plan_problems(taken).find("is called \"tare step [shift 3]\", and so is another case") != std::string::npos);
}

TEST_CASE("companions: what is refused on paper stands at the rule", "[config]") {
    const std::string text = good_plan + "[[case.rule]]\nkind = \"blocks\"\nblock_samples = [512]\n";
    CHECK(plan_problems(text) ==
          message(
              text, 33, "[[case.rule]]",
              "case \"tare step\" sends 256 samples, which in blocks of 512 samples are one block, as they are without",
              "give block_samples below 256"));
}

TEST_CASE("companions: with them a plan has no more cases than without", "[config]") {
    std::string text = with(
        good_plan,
        "[[case.rule]]\nkind = \"response\"\nbands = [{ from_hz = 10.0, to_hz = 100.0, min_db = -3, max_db = 1 }]\n",
        "");
    std::string values;
    for (int i = 1; i <= 5000; ++i) values += (i > 1 ? ", " : "") + std::to_string(i);
    text = with(text, "seed = 7\n",
                "[case.each]\n\"stimulus.seed\" = [" + values + "]\n[[case.rule]]\nkind = \"repeat\"\n");
    CHECK(plan_problems(text).find("with what its rules send again the plan has more than 10000 cases") !=
          std::string::npos);
}

TEST_CASE("companions: a plan as it is understood has the rules, and reads back the same", "[config]") {
    FakeFiles files;
    files.contents["plan.toml"] = good_plan + shift_text;
    const auto text = resolved_plan("plan.toml", files);
    REQUIRE(std::holds_alternative<std::string>(text));
    files.contents["plan.toml"] = std::get<std::string>(text);
    const auto again = resolved_plan("plan.toml", files);
    REQUIRE(std::holds_alternative<std::string>(again));
    CHECK(std::get<std::string>(again) == std::get<std::string>(text));
    CHECK(names_of(plan_of(std::get<std::string>(text))) == names_of(plan_of(good_plan + shift_text)));
}

TEST_CASE("companions of the standard set: a rule for every case holds where it can, and is written out", "[config]") {
    const std::string text =
        "title = \"CW-7\"\n[signal]\nrate_hz = 1200\ninput = \"q15\"\noutput = \"q15\"\n[[filter]]\nkind = "
        "\"moving-average\"\npoints = 16\n[[rule]]\nkind = \"linearity\"\nby_ratio = [-1]\n";
    const Plan plan = plan_of(text);
    const auto names = names_of(plan);
    const auto has = [&](const std::string& name) {
        return std::find(names.begin(), names.end(), name) != names.end();
    };
    CHECK(has("noise [linearity -1]"));
    CHECK(has("silence"));
    CHECK_FALSE(has("silence [linearity -1]"));
    FakeFiles files;
    files.contents["plan.toml"] = text;
    const auto resolved = resolved_plan("plan.toml", files);
    REQUIRE(std::holds_alternative<std::string>(resolved));
    // There the rules for every case stand first.
    auto written = names_of(plan_of(std::get<std::string>(resolved))), held = names;
    std::sort(written.begin(), written.end());
    std::sort(held.begin(), held.end());
    CHECK(written == held);
}
