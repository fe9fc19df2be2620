// A case sent once more: both sides of each limit, what each rule catches, and what cannot be judged.
#include <bit>
#include <catch2/catch.hpp>
#include <cmath>
#include <limits>

#include "oracle/arithmetic/twin.hpp"
#include "oracle/judge/admission.hpp"
#include "oracle/judge/companion_limit.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "oracle/judge/rule_kinds.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/support/companions.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::test;
using testing::Random;

namespace {

const ParameterValues nothing;

ParameterValues list(const std::string& word, std::vector<double> numbers) {
    return values({{word, std::move(numbers)}});
}

Case noise_case(const Plan& plan, std::vector<Rule> rules, double level = 0.25, std::int64_t length = 1000) {
    return a_case(plan, "noise", values({{"level_ratio", level}, {"length_samples", length}}), std::move(rules));
}

/// A moving average in Q15, rounded half up, whose noise case has the rule.
Plan plan_of(const std::string& kind, const ParameterValues& given, double level = 0.25) {
    Plan plan = moving_average_plan();
    plan.filter[0].arithmetic.rounding = Rounding::half_up;
    return with_case(plan, noise_case(plan, {rule(plan, kind, given)}, level));
}

std::vector<Code> changed(std::vector<Code> codes, std::size_t at, Code by) {
    codes[at] += by;
    return codes;
}

Board right() {
    return [](const Plan& plan, const Case& the_case) { return right_response(plan, the_case); };
}

/// One code of the answer is another.
Board off_at(std::size_t at, Code by) {
    return [=](const Plan& plan, const Case& the_case) { return changed(right_response(plan, the_case), at, by); };
}

/// A moving average of 16 points that drops its low bits.
std::vector<Code> floored(const Plan& plan, const Case& the_case) {
    std::vector<Code> codes(static_cast<std::size_t>(the_case.stimulus->length_samples()));
    fill_case_codes(plan, the_case, 0, codes);
    std::vector<Code> out;
    for (std::size_t n = 0; n < codes.size(); ++n) {
        Code sum = 0;
        for (std::size_t k = 0; k < 16 && k <= n; ++k) sum += codes[n - k];
        out.push_back(static_cast<Code>(std::floor(static_cast<double>(sum) / 16.0)));
    }
    return out;
}

}  // namespace

TEST_CASE("companion: what is sent is the sum of the base's codes, scaled and later, for any split", "[judge]") {
    const std::uint32_t seed = 81;
    CAPTURE(seed);
    Random random(seed);
    Plan plan = moving_average_plan();
    for (int round = 0; round < 100; ++round) {
        plan.signal.input = *sample_format(std::vector{"q15", "u12", "i8", "i24"}[static_cast<std::size_t>(round % 4)]);
        const Case base = noise_case(plan, {}, 0.1, random.whole(20, 400));
        Companion companion;
        for (std::int64_t i = random.whole(1, 3); i > 0; --i)
            companion.terms.push_back({random.whole(-3, 3), random.whole(0, 50)});
        const auto sent = companion_stimulus(plan.signal, base.stimulus, companion);
        const std::int64_t length = base.stimulus->length_samples();
        REQUIRE(sent->length_samples() == length + companion.shortest_delay_samples());
        const Code silence = zero_code(plan.signal.input);
        std::vector<Code> once(static_cast<std::size_t>(length)), all(static_cast<std::size_t>(sent->length_samples()));
        fill_codes(*base.stimulus, plan.signal.input, plan.signal.quantise, 0, once);
        for (std::size_t first = 0; first < all.size();) {
            const auto count = std::min(all.size() - first, static_cast<std::size_t>(random.whole(1, 90)));
            fill_codes(*sent, plan.signal.input, plan.signal.quantise, static_cast<std::int64_t>(first),
                       std::span(all).subspan(first, count));
            first += count;
        }
        for (std::size_t n = 0; n < all.size(); ++n) {
            Code sum = silence;
            for (const CompanionTerm& term : companion.terms) {
                const std::int64_t from = static_cast<std::int64_t>(n) - term.delay_samples;
                if (from >= 0 && from < length)
                    sum += static_cast<Code>(term.gain) * (once[static_cast<std::size_t>(from)] - silence);
            }
            REQUIRE(all[n] == sum);
        }
        Code outside[2] = {1, 1};
        fill_codes(*sent, plan.signal.input, plan.signal.quantise, sent->length_samples(), outside);
        CHECK(outside[0] == silence);
    }
}

TEST_CASE("companion: behind its base, with its start and nothing but the rule", "[judge]") {
    const Plan plan = moving_average_plan();
    Case base = noise_case(plan, {rule(plan, "blocks", list("block_samples", {1.0, 7.0})), implicit_latency()});
    base.labels = {"quick"};
    base.settings = {{"points", 8, {}}};
    const auto all = with_companions(plan, base);
    REQUIRE(all.size() == 3);
    CHECK(all[0].has_companions);
    CHECK(all[0].rules.size() == 1);
    CHECK_FALSE(may_end_early(plan, all[0]));
    CHECK(all[1].name == "a case [blocks 1]");
    CHECK(all[2].name == "a case [blocks 7]");
    CHECK(all[2].labels == base.labels);
    CHECK(all[2].settings.size() == 1);
    CHECK(all[2].rules.size() == 1);
    CHECK_FALSE(may_end_early(plan, all[2]));
    CHECK(sent_block_samples(all[2], 256) == 7);
    CHECK(sent_block_samples(all[2], 4) == 4);
    CHECK(sent_block_samples(all[0], 256) == 256);
    CHECK(with_companions(plan, noise_case(plan, {implicit_latency()})).size() == 1);
}

TEST_CASE("repeat: bit for bit, or within max_lsb, both sides", "[judge]") {
    const Plan exact = plan_of("repeat", nothing);
    const RuleVerdict same = verdict_with(exact, right());
    CHECK(same.verdict == Verdict::pass);
    CHECK(same.reference == "base");
    CHECK(same.reason.empty());
    REQUIRE(same.figures.size() == 1);
    CHECK(same.figures[0].name == "differing samples");
    CHECK(same.figures[0].value == 0.0);

    const RuleVerdict other = verdict_with(exact, right(), off_at(700, -1));
    CHECK(other.verdict == Verdict::fail);
    CHECK(other.reason ==
          "1 of 1000 samples differs from the response of \"a case\", by 1 LSB, the first at sample 700");
    REQUIRE(other.first_bad);
    CHECK(other.first_bad->index == 700);
    CHECK(other.first_bad->reference[4] == static_cast<double>(other.first_bad->response[4]) + 1.0);

    const Plan within = plan_of("repeat", values({{"max_lsb", 2.0}}));
    CHECK(verdict_with(within, right(), off_at(700, 2)).verdict == Verdict::pass);
    const RuleVerdict beyond = verdict_with(within, right(), off_at(700, 3));
    CHECK(beyond.verdict == Verdict::fail);
    CHECK(beyond.figures[0].name == "max");
    CHECK(beyond.figures[0].value == 3.0);
    CHECK(beyond.figures[0].limit == 2.0);
    CHECK(beyond.figures[0].margin == -1.0);
}

TEST_CASE("repeat: what was left of the run before is called so", "[judge]") {
    const Plan plan = plan_of("repeat", nothing);
    const Board kept = [](const Plan& of, const Case& the_case) {
        auto codes = right_response(of, the_case);
        for (std::size_t n = 0; n < 15; ++n) codes[n] += static_cast<Code>(150 - 10 * n);
        return codes;
    };
    const RuleVerdict verdict = verdict_with(plan, right(), kept);
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(verdict.reason ==
          "15 of 1000 samples differ from the response of \"a case\", by up to 150 LSB, the first at sample 0; none "
          "behind sample 14: state left from the run before");
}

TEST_CASE("blocks: the block is named where each difference stands at one place of it", "[judge]") {
    const Plan plan = plan_of("blocks", list("block_samples", {7.0}));
    CHECK(verdict_with(plan, right()).verdict == Verdict::pass);
    const Board lost = [](const Plan& of, const Case& the_case) {
        auto codes = right_response(of, the_case);
        if (the_case.companion) {
            for (std::size_t n = 7; n < codes.size(); n += 7) codes[n] += 5;
        }
        return codes;
    };
    const RuleVerdict verdict = verdict_with(plan, lost);
    CHECK(verdict.verdict == Verdict::fail);
    CHECK(verdict.reason ==
          "142 of 1000 samples differ from the response of \"a case\", by up to 5 LSB, the first at sample 7, where a "
          "block begins; each is sample 0 of its block of 7");
}

TEST_CASE("blocks: sent as the base was, nothing is compared", "[judge]") {
    const Plan plan = plan_of("blocks", list("block_samples", {300.0}));
    const auto response = right_response(plan, plan.cases[1]);
    const auto verdict = [&](std::int64_t granted) {
        return verdicts_of(plan, plan.cases[1], base_of(response, 1, granted), response).front();
    };
    const RuleVerdict same = verdict(256);
    CHECK(same.verdict == Verdict::undecided);
    CHECK(same.reason ==
          "its base, \"a case\", was sent in the same blocks of 256 samples, so nothing is compared; give smaller "
          "block_samples");
    CHECK(verdict(512).verdict == Verdict::pass);
    CHECK(verdict(0).verdict == Verdict::pass);  // not known
}

TEST_CASE("shift: a filter that knows neither time nor offset passes, others fail", "[judge]") {
    const Plan plan = plan_of("shift", list("by_samples", {5.0}));
    CHECK(plan.cases[1].stimulus->length_samples() == 1005);
    CHECK(verdict_with(plan, right()).verdict == Verdict::pass);
    const Board offset = [](const Plan& of, const Case& the_case) {
        auto codes = right_response(of, the_case);
        for (Code& code : codes) code += 3;
        return codes;
    };
    const RuleVerdict shifted = verdict_with(plan, offset);
    CHECK(shifted.verdict == Verdict::fail);
    CHECK(shifted.reason ==
          "5 of 1005 samples differ from what follows from the response of \"a case\", by up to 3 LSB, the first at "
          "sample 0");
    const Board each_eighth = [](const Plan& of, const Case& the_case) {
        auto codes = right_response(of, the_case);
        for (std::size_t n = 0; n < codes.size(); n += 8) codes[n] += 1;
        return codes;
    };
    CHECK(verdict_with(plan, each_eighth).verdict == Verdict::fail);
    // An eighth that falls on itself is not seen: that is what several shifts are for.
    const Plan by_8 = plan_of("shift", list("by_samples", {8.0}));
    CHECK(verdict_with(by_8, each_eighth).figures[0].value == 1.0);
}

TEST_CASE("linearity: within what two roundings can differ, both sides", "[judge]") {
    // Half up errs by no more than half an LSB, and two responses by no more than one.
    const Plan plan = plan_of("linearity", nothing);
    REQUIRE(derived_companion_limit(plan, plan.cases[1], 1));
    CHECK(*derived_companion_limit(plan, plan.cases[1], 1) == Approx(1.0 / 32768.0));
    const RuleVerdict verdict = verdict_with(plan, right());
    CHECK(verdict.verdict == Verdict::pass);
    REQUIRE(verdict.figures.size() == 1);
    CHECK(*verdict.figures[0].limit == Approx(1.0).epsilon(1e-6));
    const auto mirrored = [&](Code by) {
        return verdict_with(plan, right(), [by](const Plan& of, const Case& the_case) {
            auto codes = right_response(of, of.cases[0]);
            for (Code& code : codes) code = -code;
            codes[400] += by;
            CHECK(codes.size() == static_cast<std::size_t>(the_case.stimulus->length_samples()));
            return codes;
        });
    };
    CHECK(mirrored(1).verdict == Verdict::pass);
    CHECK(mirrored(-2).verdict == Verdict::fail);
    CHECK(mirrored(-2).reason ==
          "1 of 1000 samples differs from what follows from the response of \"a case\", by 2 LSB, the first at sample "
          "400");

    // Scaled by 5 the base's error counts five times: -7/16 (of a tie that went up) - 5/2.
    const Plan five = plan_of("linearity", list("by_ratio", {5.0}), 0.1);
    CHECK(*verdict_with(five, right()).figures[0].limit == Approx(2.9375).epsilon(1e-6));
    CHECK(verdict_with(five, right()).verdict == Verdict::pass);
    const Plan added = plan_of("linearity", list("by_samples", {9.0}));
    CHECK(*verdict_with(added, right()).figures[0].limit == Approx(1.4375).epsilon(1e-6));
    CHECK(verdict_with(added, right()).verdict == Verdict::pass);
}

TEST_CASE("linearity: a truncation shows in the mean, which a limit must be given for", "[judge]") {
    CHECK(verdict_with(plan_of("linearity", nothing), floored).verdict == Verdict::pass);
    const Plan plan = plan_of("linearity", values({{"bias_lsb", 0.25}}));
    const RuleVerdict rounded = verdict_with(plan, right());
    CHECK(rounded.verdict == Verdict::pass);
    REQUIRE(rounded.figures.size() == 2);
    CHECK(rounded.figures[1].name == "bias");
    const RuleVerdict truncated = verdict_with(plan, floored);
    CHECK(truncated.verdict == Verdict::fail);
    // floor(a) + floor(-a) is -1 but for the sixteenth of all sums that lose nothing.
    CHECK(truncated.figures[1].value.value() == Approx(-15.0 / 16.0).margin(0.05));
    CHECK(truncated.figures[0].passed());
}

TEST_CASE("linearity: a dead band and a gain that hangs on the level fail", "[judge]") {
    const Plan plan = plan_of("linearity", list("by_ratio", {3.0}));
    const Board dead = [](const Plan& of, const Case& the_case) {
        auto codes = right_response(of, the_case);
        for (Code& code : codes) code = std::abs(code) < 20 ? 0 : code;
        return codes;
    };
    CHECK(verdict_with(plan, right()).verdict == Verdict::pass);
    CHECK(verdict_with(plan, dead).verdict == Verdict::fail);
    const Board bent = [](const Plan& of, const Case& the_case) {
        auto codes = right_response(of, the_case);
        for (Code& code : codes) code += code * code / 1'000'000;
        return codes;
    };
    CHECK(verdict_with(plan, bent).verdict == Verdict::fail);
}

TEST_CASE("linearity: from the first sample that may clip on nothing is said", "[judge]") {
    Plan plan = moving_average_plan(1);
    plan.filter[0].design = Fir{{1.5}};
    plan.filter[0].coefficient_fraction_bits = 14;
    plan.filter[0].arithmetic.coefficient_fraction_bits = 14;
    Case base =
        a_case(plan, "ramp", values({{"from_ratio", 0.0}, {"to_ratio", 0.45}, {"length_samples", std::int64_t{451}}}),
               {rule(plan, "linearity", list("by_ratio", {2.0}))});
    plan = with_case(plan, base);
    REQUIRE(refusals(plan, plan.cases[1]).empty());
    const RuleVerdict clipped = verdict_with(plan, right());
    CHECK(clipped.verdict == Verdict::undecided);
    // 3 x ramp reaches full scale at a third of it.
    const std::string at = "the declared arithmetic may reach a rail at sample 334";
    CHECK(clipped.reason.substr(0, at.size()) == at);
    CHECK(clipped.reason.ends_with(
        ", and what clips is not linear: nothing is compared from there on; lower the level of the stimulus"));
    // What fails before is no less wrong.
    CHECK(verdict_with(plan, right(), off_at(100, 9)).verdict == Verdict::fail);
    CHECK(verdict_with(plan, right(), off_at(400, 9)).verdict == Verdict::undecided);

    // Of an unknown filter the response alone says where it clips.
    plan.filter_is_unknown = true;
    plan.cases[1].rules = {rule(plan, "linearity", values({{"max_lsb", 4.0}}))};
    const RuleVerdict unknown = verdict_with(plan, right());
    CHECK(unknown.verdict == Verdict::undecided);
    CHECK(unknown.reason ==
          "a response stands at an end of the output's word at sample 334, and what clips is not linear: nothing is "
          "compared from there on; lower the level of the stimulus");
}

TEST_CASE("companion: what has no base is undecided", "[judge]") {
    const Plan plan = plan_of("repeat", nothing);
    const auto response = right_response(plan, plan.cases[1]);
    const auto reason = [&](BaseResponse base) {
        const RuleVerdict verdict = verdicts_of(plan, plan.cases[1], std::move(base), response).front();
        CHECK(verdict.verdict == Verdict::undecided);
        CHECK(verdict.figures.empty());
        return verdict.reason;
    };
    CHECK(reason({}) == "not judged: nothing was captured of its base, \"a case\"");
    BaseResponse missing;
    missing.missing = "its base was lost";
    CHECK(reason(missing) == "not judged: its base was lost");
    auto part = response;
    part.resize(400);
    CHECK(reason(base_of(part)) == "not judged: its base, \"a case\", has 400 samples, and 1000 are compared");

    // Nor does a rule pass whose companions nobody made.
    const Plan bare = moving_average_plan();
    const Case alone = noise_case(bare, {rule(bare, "repeat", nothing)});
    CaseJudge judge(bare, alone);
    judge.add(right_response(bare, alone));
    const auto judgement = judge.finish({});
    REQUIRE(judgement->rules.size() == 1);
    CHECK(judgement->rules[0].verdict == Verdict::undecided);
    CHECK(judgement->rules[0].reason == "the stimulus was not sent again");
}

TEST_CASE("companion: a base that cannot be read is an error", "[judge]") {
    const Plan plan = plan_of("repeat", nothing);
    const auto response = right_response(plan, plan.cases[1]);
    BaseResponse base = base_of(response);
    base.read = [](std::int64_t first, std::span<Code>) -> Outcome<void> {
        if (first < 500) return {};
        return Error{ErrorKind::input, "captures/001.npy", "it was cut", ""};
    };
    CaseJudge judge(plan, plan.cases[1], false, base);
    for (std::size_t first = 0; first < response.size(); first += 250)
        judge.add(std::span(response).subspan(first, 250));
    const auto judgement = judge.finish({});
    REQUIRE_FALSE(judgement);
    CHECK(judgement.error().problem == "it was cut");
}

TEST_CASE("companion: each channel is judged, driven or not", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.channels = 2;
    Case base = noise_case(plan, {rule(plan, "repeat", nothing)});
    base.channel = 1;
    plan = with_case(plan, base);
    const auto response = right_response(plan, plan.cases[0]);
    const auto all = verdicts_of(plan, plan.cases[1], base_of(response, 2), changed(response, 2 * 300 + 1, 1));
    REQUIRE(all.size() == 2);
    CHECK(all[0].verdict == Verdict::pass);
    CHECK(all[0].channel == 1);
    CHECK(all[1].verdict == Verdict::fail);
    CHECK(all[1].channel == 2);
    CHECK(all[1].first_bad->index == 300);
}

TEST_CASE("companion: a decimator's answer comes later by as many samples as it returns", "[judge]") {
    Plan plan = moving_average_plan();
    plan.filter[0].design = FirDecimator{{0.25, 0.5, 0.25}, 4};
    plan.filter[0].coefficient_fraction_bits = 14;
    plan.filter[0].arithmetic.coefficient_fraction_bits = 14;
    const auto judged_by = [&](double by) {
        const Plan shifted = with_case(plan, noise_case(plan, {rule(plan, "shift", list("by_samples", {by}))}));
        CHECK(refusals(shifted, shifted.cases[1]).empty() == (by != 6.0));
        return verdict_with(shifted, right());
    };
    CHECK(judged_by(8.0).verdict == Verdict::pass);
    CHECK(judged_by(8.0).figures[0].value == 0.0);
    judged_by(6.0);
}

TEST_CASE("companion: not a number is the same answer twice, and no linear one", "[judge]") {
    Plan plan = moving_average_plan();
    plan.signal.input = plan.signal.output = *sample_format("f32");
    const Code none = std::bit_cast<Code>(std::numeric_limits<float>::quiet_NaN());
    REQUIRE(std::isnan(value_of(plan.signal.output, none)));
    const Board broken = [none](const Plan& of, const Case& the_case) {
        auto codes = right_response(of, the_case);
        codes[30] = none;
        return codes;
    };
    const Plan again = with_case(plan, noise_case(plan, {rule(plan, "repeat", nothing)}));
    CHECK(verdict_with(again, broken).verdict == Verdict::pass);
    CHECK(verdict_with(again, right(), broken).verdict == Verdict::fail);
    const Plan scaled = with_case(plan, noise_case(plan, {rule(plan, "linearity", values({{"max_ratio", 1e-5}}))}));
    const RuleVerdict verdict = verdict_with(scaled, broken);
    CHECK(verdict.verdict == Verdict::undecided);
    CHECK(verdict.reason == "a response holds a value that is not a finite number");
}

TEST_CASE("companion: no right board fails, in any arithmetic", "[judge]") {
    const std::uint32_t seed = 1207;
    CAPTURE(seed);
    Random random(seed);
    int judged = 0, passed = 0, linear_passes = 0;
    const auto rounds = rounds_of(400);
    for (std::int64_t round = 0; round < rounds; ++round) {
        const testing::RandomChain chain =
            testing::chance(random, 20) ? testing::random_narrow_chain(random) : testing::random_chain(random);
        if (!make_twin(chain.described)) continue;
        Plan plan = moving_average_plan();
        plan.filter = chain.stages;
        plan.signal.input = chain.in;
        plan.signal.output = chain.out;
        const Board board = [](const Plan& of, const Case& the_case) {
            std::vector<Code> sent(static_cast<std::size_t>(the_case.stimulus->length_samples()));
            fill_case_codes(of, the_case, 0, sent);
            const auto twin = make_twin(*described_channel(of, the_case, 1));
            std::vector<Code> out(twin->outputs_for(sent.size()));
            twin->process(sent, out);
            return out;
        };
        const std::int64_t cycle = CaseRates(plan, noise_case(plan, {})).cycle().inputs;
        const double level = std::ldexp(0.9, -static_cast<int>(random.whole(1, 6)));
        const auto later = static_cast<double>(cycle * random.whole(1, 20));
        const std::vector<Rule> rules = {
            rule(plan, "repeat", nothing), rule(plan, "shift", list("by_samples", {later})),
            rule(plan, "linearity", list("by_ratio", {-1.0})), rule(plan, "linearity", list("by_ratio", {2.0})),
            rule(plan, "linearity", list("by_samples", {later}))};
        for (const Rule& one : rules) {
            const Plan asked = with_case(plan, noise_case(plan, {one}, level, cycle * random.whole(60, 1500)));
            if (!refusals(asked, asked.cases[1]).empty()) continue;
            INFO("round " << round << ", " << asked.cases[1].name << ", level " << level << "\n" << text_of(chain));
            const RuleVerdict verdict = verdict_with(asked, board);
            INFO(verdict.reason);
            CHECK(verdict.verdict != Verdict::fail);
            ++judged;
            if (verdict.verdict == Verdict::pass) ++passed;
            if (verdict.verdict == Verdict::pass && std::holds_alternative<LinearityRule>(one.kind)) ++linear_passes;
        }
    }
    CAPTURE(judged, passed, linear_passes);
    if (draws_all_rounds()) {
        CHECK(judged > 1000);
        CHECK(linear_passes > 300);
    }
}
