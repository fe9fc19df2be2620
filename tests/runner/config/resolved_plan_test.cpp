// A plan printed as it is understood.
#include "runner/config/resolved_plan.hpp"

#include "runner/config/toml_text.hpp"
#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

std::string resolved(const std::string& text, FakeFiles files = {}, const PlanOptions& options = {}) {
    files.contents["plan.toml"] = text;
    auto printed = resolved_plan("plan.toml", files, options);
    if (const auto* problems = std::get_if<ReadProblems>(&printed)) FAIL(joined(*problems));
    return std::get<std::string>(std::move(printed));
}

}  // namespace

TEST_CASE("resolved plan: includes are joined, cases expanded and defaults written out", "[config]") {
    FakeFiles files;
    files.contents["./common.toml"] = "[signal]\noutput = \"q15\"\n[[rule]]\nkind = \"error\"\nmax_lsb = 1.5\n";
    const std::string text = resolved(
        "title = \"CW-7 \\\"left\\\" \\\\ cell\"\ninclude = [\"common.toml\"]\n"
        "[[case]]\nname = \"tare step\"\nlabels = [\"quick\"]\n[case.each]\n\"stimulus.level_ratio\" = [1e-1, 1]\n"
        "[case.stimulus]\nlength_samples = 256\nshape = \"step\"\n[case.settings]\n\"my gain\" = 3\n"
        "[[filter]]\nkind = \"fir\"\ntaps = [0.25, 5e-1, 0.25]\n"
        "[signal]\ninput = \"q15\"\nrate_hz = 1200\n",
        files);
    INFO(text);
    CHECK(
        text.starts_with("title = \"CW-7 \\\"left\\\" \\\\ cell\"\nalpha = 1e-06\nbeta = 0.001\nconfidence = "
                         "0.95\nstream = \"decided\"\n\n[signal]\n"));
    CHECK(text.find("include") == std::string::npos);
    CHECK(text.find("each") == std::string::npos);
    CHECK(text.find("\nquantise = \"half-up\"\n") != std::string::npos);
    CHECK(text.find("\n[[filter]]\nkind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n") != std::string::npos);
    CHECK(text.find("\n[[case]]\nname = \"tare step, level_ratio 0.1\"\nlabels = [\"quick\"]\nstart = \"reset\"\n") !=
          std::string::npos);
    CHECK(text.find("\nname = \"tare step, level_ratio 1\"\n") != std::string::npos);
    CHECK(text.find("\nat_samples = 0\n") != std::string::npos);
    CHECK(text.find("\n[case.settings]\n\"my gain\" = 3\n") != std::string::npos);
    CHECK(resolved(text) == text);
    CHECK(plan_of(text).cases.size() == 2);
}

TEST_CASE("resolved plan: a default that the table does not take beside what is given is left out", "[config]") {
    const std::string text = resolved(good_plan + "level_codes = 1000\n");
    CHECK(text.find("\nlevel_codes = 1000\n") != std::string::npos);
    const std::size_t step = text.find("\"tare step\"");
    CHECK(text.find("level_ratio", step) == std::string::npos);
    CHECK(text.find("at_samples = 0", step) != std::string::npos);
    CHECK(resolved(text) == text);
}

TEST_CASE("resolved plan: a case after a stimulus in braces, and rules in braces, read back as they were", "[config]") {
    const std::string text = resolved(
        good_plan +
        "[[case]]\nrule = [{ kind = \"error\", max_unit = 3 }]\nname = \"inline\"\nstimulus = { shape = \"noise\", "
        "length_samples = 4096 }\n");
    CHECK(resolved(text) == text);
    const Plan plan = plan_of(text);
    REQUIRE(plan.cases.size() == 3);
    CHECK(plan.cases[2].rules.size() == plan_of(good_plan).cases[1].rules.size());
    CHECK(std::get<ErrorRule>(plan.cases[2].rules[0].kind).largest == Limit{3.0, Limit::In::unit});
}

TEST_CASE("resolved plan: --seed is written in", "[config]") {
    PlanOptions options;
    options.seed = 99;
    const std::string text = resolved(good_plan, {}, options);
    CHECK(text.find("\nseed = 99\n") != std::string::npos);
    CHECK(text.find("\nseed = 7\n") == std::string::npos);
}

TEST_CASE("resolved plan: a plan that is refused is not printed", "[config]") {
    FakeFiles files;
    files.contents["plan.toml"] = with(good_plan, "max_lsb", "max_lbs");
    const auto printed = resolved_plan("plan.toml", files);
    REQUIRE(std::holds_alternative<ReadProblems>(printed));
    CHECK(joined(std::get<ReadProblems>(printed)).find("did you mean max_lsb?") != std::string::npos);
}

TEST_CASE("toml text: strings, numbers and keys read back as they were", "[config]") {
    const std::string line =
        "\"a b.c\" = [\"q\\\"\\\\\\u0007\\u001b\xC3\xA9\", 0.1, 1e-07, 5e-324, 1e+300, 3.0, -7, "
        "true, [], {}, { x = 1, \"\" = [2.5] }]\n";
    const SourceText source("f", line);
    const auto tree = parse_toml(source);
    REQUIRE(std::holds_alternative<TomlValue>(tree));
    CHECK(toml_table(std::get<TomlValue>(tree), "", {}) == line);
    // A long array is broken between its items.
    TomlValue number, array, table;
    number.kind = TomlValue::Kind::real;
    number.real = -0.123456789012345;
    array.kind = TomlValue::Kind::array;
    array.items.assign(20, number);
    table.entries.push_back({"taps", {}, array});
    const std::string text = toml_table(table, "", {});
    CHECK(text.starts_with("taps = [\n    -0.123456789012345, "));
    CHECK(text.ends_with(",\n]\n"));
    const SourceText broken("f", text);
    const auto again = parse_toml(broken);
    REQUIRE(std::holds_alternative<TomlValue>(again));
    CHECK(std::get<TomlValue>(again).entries[0].value.items.size() == 20);
    for (int i = 1; i <= broken.line_count(); ++i) CHECK(broken.line(i).size() <= 110);
}
