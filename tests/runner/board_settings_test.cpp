// Which settings are sent before a case, and which back at the end.
#include "runner/board_settings.hpp"

#include <catch2/catch.hpp>

#include "runner/wire/framed_wire.hpp"
#include "tests/support/model_board.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

Greeting greeting_of(std::vector<BoardSetting> settings) {
    Greeting greeting;
    greeting.settings = std::move(settings);
    return greeting;
}

const Greeting three = greeting_of({{"gain", 0, 7, 3}, {"average-points", 1, 64, 16}, {"offset", -100, 100, 0}});

Plan plan_with(std::vector<std::vector<CaseSetting>> settings_of_cases) {
    Plan plan;
    for (auto& settings : settings_of_cases) {
        Case made;
        made.name = "case " + std::to_string(plan.cases.size() + 1);
        made.settings = std::move(settings);
        plan.cases.push_back(std::move(made));
    }
    return plan;
}

CaseSetting setting(const std::string& name, std::int32_t value) { return {name, value, {"plan.toml", 14, 1}}; }

using Pairs = std::vector<std::pair<std::size_t, std::int32_t>>;
Pairs pairs(const std::vector<BoardSettings::Change>& changes) {
    Pairs made;
    for (const BoardSettings::Change& change : changes) made.emplace_back(change.number, change.value);
    return made;
}

/// Settings on a wire to the model board.
struct Line {
    FakeClock clock;
    ModelBoard board;
    FakeLink link{clock, board};
    std::unique_ptr<Wire> wire;

    explicit Line(const Greeting& greeting, int credit_blocks = 4) {
        for (const BoardSetting& known : greeting.settings)
            board.settings.push_back({known.name, known.minimum, known.maximum, known.value});
        board.credit_blocks = credit_blocks;
        WireLimits limits;
        wire = make_framed_wire(link, clock, limits, 7);
        REQUIRE(wire->greet());
        REQUIRE(wire->start(0));
    }
};

}  // namespace

TEST_CASE("settings: those of a case go out, and back where the next does not mention them", "[run]") {
    const Plan plan = plan_with({{setting("average-points", 8), setting("gain", 5)},
                                 {setting("average-points", 8)},
                                 {},
                                 {setting("average-points", 16)}});
    auto settings = BoardSettings::agreed(three, plan, {0, 1, 2, 3}, "port");
    REQUIRE(settings);
    Line line(three, GENERATE(1, 4));
    const auto run = [&](std::size_t index) {
        const auto changes = settings->changes_for(plan.cases[index]);
        REQUIRE(settings->make(changes, *line.wire, line.clock));
        return pairs(changes);
    };
    // Its own in the plan's order; what it mentions is sent even where it is so already.
    CHECK(run(0) == Pairs{{1, 8}, {0, 5}});
    CHECK(settings->text_of_changed() == "gain (3 at the start, now 5), average-points (16 at the start, now 8)");
    CHECK(run(1) == Pairs{{0, 3}, {1, 8}});
    CHECK(pairs(settings->changes_back()) == Pairs{{1, 16}});
    CHECK(run(2) == Pairs{{1, 16}});
    CHECK(settings->changes_back().empty());
    CHECK(run(3) == Pairs{{1, 16}});
    CHECK(settings->text_of_changed().empty());
    CHECK(line.board.settings_made.size() == 6);
}

TEST_CASE("settings: nothing is assumed of a board that was greeted again", "[run]") {
    const Plan plan = plan_with({{setting("average-points", 8)}, {setting("gain", 5)}, {}});
    auto settings = BoardSettings::agreed(three, plan, {0, 1, 2}, "port");
    REQUIRE(settings);
    Line line(three);
    // Before anything was changed there is nothing to put back, whatever is unknown.
    settings->forget();
    CHECK(settings->changes_back().empty());
    CHECK(pairs(settings->changes_for(plan.cases[2])) == Pairs{{0, 3}, {1, 16}});
    REQUIRE(settings->make(settings->changes_for(plan.cases[0]), *line.wire, line.clock));
    settings->forget();
    CHECK(pairs(settings->changes_for(plan.cases[1])) == Pairs{{1, 16}, {0, 5}});
    CHECK(pairs(settings->changes_back()) == Pairs{{1, 16}});
    CHECK(settings->text_of_changed() == "average-points (16 at the start)");
}

TEST_CASE("settings: one that was not acknowledged counts as unknown", "[run]") {
    const Plan plan = plan_with({{setting("average-points", 8)}});
    auto settings = BoardSettings::agreed(three, plan, {0}, "port");
    REQUIRE(settings);
    Line line(three);
    line.link.to_host.set_fault({LineFault::lose, true, line.link.to_host.transfers() + 1});
    const auto made = settings->make(settings->changes_for(plan.cases[0]), *line.wire, line.clock);
    REQUIRE_FALSE(made);
    CHECK(made.error().kind == ErrorKind::bench);
    CHECK(pairs(settings->changes_back()) == Pairs{{1, 16}});
}

TEST_CASE("settings: only those that selected cases change are ever touched", "[run]") {
    const Plan plan = plan_with({{setting("gain", 5)}, {}});
    auto settings = BoardSettings::agreed(three, plan, {1}, "port");
    REQUIRE(settings);
    settings->forget();
    CHECK(settings->changes_for(plan.cases[1]).empty());
}

TEST_CASE("settings: one that the board cannot take is refused before anything is sent", "[run]") {
    const auto refusal = [](const Greeting& greeting, CaseSetting wanted) {
        const Plan plan = plan_with({{}, {std::move(wanted)}});
        // A case that is not selected may ask what it likes.
        REQUIRE(BoardSettings::agreed(greeting, plan, {0}, "port"));
        const auto refused = BoardSettings::agreed(greeting, plan, {0, 1}, "port");
        REQUIRE_FALSE(refused);
        CHECK(refused.error().kind == ErrorKind::bench);
        return to_text(refused.error());
    };
    CHECK(refusal(three, setting("average-pts", 8)) ==
          "port: the board has no setting \"average-pts\", which case \"case 2\" (plan.toml:14:1) changes; it has "
          "\"gain\" (0 to 7), \"average-points\" (1 to 64), \"offset\" (-100 to 100)\n"
          "  correct [case.settings] of the plan, or flash the firmware that has it");
    CHECK(refusal(greeting_of({}), setting("gain", 1)) ==
          "port: the board has no setting \"gain\", which case \"case 2\" (plan.toml:14:1) changes; it has none\n"
          "  correct [case.settings] of the plan, or flash the firmware that has it");
    CHECK(refusal(three, setting("average-points", 65)) ==
          "port: setting \"average-points\" takes 1 to 64, case \"case 2\" (plan.toml:14:1) wants 65\n"
          "  correct [case.settings] of the plan, or flash the firmware it is about");
    CHECK_THAT(refusal(three, setting("offset", -101)), Catch::Contains("takes -100 to 100"));
    const Plan ends = plan_with({{setting("average-points", 1)}, {setting("average-points", 64)}});
    CHECK(BoardSettings::agreed(three, ends, {0, 1}, "port"));
}
