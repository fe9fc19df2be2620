// Where the realisations of tones stand in what is judged, and what a response needs of them.
#include <algorithm>
#include <catch2/catch.hpp>

#include "oracle/judge/admission.hpp"
#include "oracle/judge/response_judge.hpp"
#include "tests/oracle/judge/judging.hpp"
#include "tests/support/plans.hpp"

using namespace halflsb;
using test::values;

namespace {

/// 8 cycles a realisation of 128 samples, from index `at` on, `left_over` more (fewer than realisations) at the end.
Case toned(const Plan& plan, std::int64_t realisations, std::int64_t at, std::int64_t left_over,
           std::vector<Rule> rules = {}) {
    return test::a_case(plan, "sine",
                        values({{"frequency_hz", 75.0},
                                {"length_samples", at + 128 * realisations + left_over},
                                {"at_samples", at},
                                {"realisations", realisations},
                                {"level_ratio", 0.9}}),
                        std::move(rules));
}

Case discarding(Case the_case, std::int64_t discard) {
    the_case.start = Start::running;
    the_case.start_samples = discard;
    return the_case;
}

/// The reference indices that meet a response sample, by the words of aligned_pass.hpp: response n and reference
/// n - lag; of a running case both behind the discard, else before its start the reference is silent.
std::vector<std::int64_t> met(std::int64_t length, std::int64_t discard, int lag) {
    std::vector<std::int64_t> found;
    for (std::int64_t n = discard; n < length; ++n)
        if (n - lag < length && (discard == 0 || n - lag >= discard)) found.push_back(n - lag);
    return found;
}

Rule gain_at_75_hz(const Plan& plan, double min_db, double max_db) {
    return test::rule(plan, "response",
                      values({{"bands", std::vector<std::vector<double>>{{74.0, 76.0, min_db, max_db}}}}));
}

Rule expected_latency(const Plan& plan, std::int64_t samples) {
    return test::rule(plan, "latency", values({{"latency_samples", samples}}));
}

}  // namespace

TEST_CASE("realisations: those measured are the ones whose samples are all judged", "[judge]") {
    const Plan plan = test::moving_average_plan();
    for (const std::int64_t at : {0, 5, 200}) {
        for (const std::int64_t discard : {0, 1, 5, 127, 128, 129, 200, 500, 700}) {
            for (const int lag : {0, 1, -1, 64, -64}) {
                for (const std::int64_t left_over : {0, 3}) {
                    INFO("at " << at << ", discard " << discard << ", lag " << lag << ", left over " << left_over);
                    Case the_case = toned(plan, 5, at, left_over);
                    if (discard > 0) the_case = discarding(std::move(the_case), discard);
                    const auto indices = met(at + 5 * 128 + left_over, discard, lag);
                    std::int64_t first = -1, whole = 0;
                    for (std::int64_t k = 0; k < 5; ++k) {
                        const auto begin = std::find(indices.begin(), indices.end(), at + 128 * k);
                        if (begin == indices.end()) continue;
                        if (first < 0) first = begin - indices.begin();
                        if (indices.back() >= at + 128 * (k + 1) - 1) ++whole;
                    }
                    const MeasuredRealisations parts = measured_realisations(plan, the_case, lag);
                    if (whole > 0) {
                        CHECK(parts == MeasuredRealisations{first, 128, whole});
                    } else if (first >= 0) {
                        CHECK(parts == MeasuredRealisations{first, 128, 1});  // as much as there is of one
                    } else {
                        CHECK(parts == MeasuredRealisations{0, static_cast<std::int64_t>(indices.size()), 1});
                    }
                }
            }
        }
    }
}

TEST_CASE("realisations: a single one is all that is judged", "[judge]") {
    const Plan plan = test::moving_average_plan();
    CHECK(measured_realisations(plan, toned(plan, 1, 100, 50)) == MeasuredRealisations{0, 278, 1});
    CHECK(measured_realisations(plan, discarding(toned(plan, 1, 0, 50), 70)) == MeasuredRealisations{0, 108, 1});
}

TEST_CASE("realisations: the measure sees each from its first sample to its last", "[judge]") {
    const Plan plan = test::moving_average_plan();
    for (const int lag : {0, 7, -7}) {
        for (const std::int64_t discard : {0, 300}) {
            INFO("lag " << lag << ", discard " << discard);
            Case the_case = toned(plan, 8, 31, 7);
            if (discard > 0) the_case = discarding(std::move(the_case), discard);
            const auto measure = make_response_measure(plan, the_case, lag);
            for (const std::int64_t index : met(31 + 8 * 128 + 7, discard, lag)) {
                std::vector<double> one(1);
                the_case.stimulus->fill(index, one);
                measure->add(one, one);
            }
            measure->finish();
            const ResponseSums& sums = measure->sums();
            const MeasuredRealisations parts = measured_realisations(plan, the_case, lag);
            CHECK(sums.averages == parts.count);
            CHECK(parts.count >= (discard == 0 ? 7 : 5));
            // Whole cycles of one phase under a periodic Hann window: |X| = level / 2 x 128 / 2, whatever the phase. A
            // stretch that is off by 7 holds another phase there: the window is up to 0.03 and changes |X|^2 by 1e-4.
            const double power = 0.9 * 0.9 * 32.0 * 32.0;
            for (std::size_t batch = 0; batch < sums.sums.batches(); ++batch)
                CHECK(sums.sums.power(batch, 0) ==
                      Approx(power * static_cast<double>(sums.sums.parts_a_batch())).epsilon(1e-9));
        }
    }
}

TEST_CASE("realisations: a verdict rests on those that are whole at the lag of the pass", "[judge]") {
    Plan plan = test::moving_average_plan(1);
    plan.streams_whole = true;  // nothing is decided before all have come
    const auto verdict = [&](const Case& the_case, const std::vector<Code>& response) {
        for (const RuleVerdict& found : test::judge(plan, the_case, response).rules)
            if (std::holds_alternative<ResponseRule>(found.rule.kind)) return found.verdict;
        FAIL("no verdict");
        return Verdict::undecided;
    };
    const auto doubled = [](std::vector<Code> response, std::size_t first, std::size_t last) {
        for (std::size_t n = first; n < last; ++n) response[n] = static_cast<Code>(response[n] / 2);
        return response;
    };
    const std::vector<Rule> rules{expected_latency(plan, 5), gain_at_75_hz(plan, -0.01, 0.01)};
    // At a latency of 5 with nothing left over, the last realisation is cut: what it holds is not measured.
    Case the_case = toned(plan, 64, 0, 0, rules);
    auto right = test::delayed(test::right_response(plan, the_case), 5);
    CHECK(verdict(the_case, right) == Verdict::pass);
    CHECK(verdict(the_case, doubled(right, 63 * 128 + 5, 64 * 128)) == Verdict::pass);
    CHECK(verdict(the_case, doubled(right, 62 * 128 + 5, 63 * 128 + 5)) != Verdict::pass);
    the_case = toned(plan, 64, 0, 5, rules);
    right = test::delayed(test::right_response(plan, the_case), 5);
    CHECK(verdict(the_case, doubled(right, 63 * 128 + 5, 64 * 128 + 5)) != Verdict::pass);
    // What a discard cuts is not measured either.
    the_case = discarding(toned(plan, 64, 0, 5, rules), 10);
    CHECK(verdict(the_case, doubled(right, 15, 128 + 5)) == Verdict::pass);
    CHECK(verdict(the_case, doubled(right, 128 + 5, 256 + 5)) != Verdict::pass);
}

TEST_CASE("realisations: tones must be resolved within one", "[judge]") {
    const Plan plan = test::moving_average_plan();
    const Rule band =
        test::rule(plan, "response", values({{"bands", std::vector<std::vector<double>>{{45.0, 155.0, -90.0, 1.0}}}}));
    const auto refused = [&](std::int64_t realisations, std::int64_t discard = 0) {
        Case made = test::a_case(plan, "multitone",
                                 values({{"frequencies_hz", std::vector<double>{50.0, 60.0, 150.0}},
                                         {"length_samples", std::int64_t{4800}},
                                         {"realisations", realisations}}),
                                 {band});
        if (discard > 0) made = discarding(std::move(made), discard);
        const auto found = refusals(plan, made);
        return found.empty() ? "" : found[0].problem + "; " + found[0].remedy;
    };
    // 10 Hz x 480 / 1200 Hz = 4 cycles.
    CHECK(refused(10) == "");
    CHECK(refused(10, 100) == "");
    CHECK(refused(11) ==
          "case \"a case\" is too short to keep its tones apart: 436 samples in a realisation; tones must be 4 cycles "
          "apart over it, and as far from 0 and Nyquist: lengthen it, or give it fewer realisations");
    // All that is left is the end of the last.
    CHECK(refused(2, 4800 - 480).find("asks for the response of tones in one realisation") != std::string::npos);
    CHECK(refused(2, 4800 - 479).substr(0, 75) ==
          "case \"a case\" is too short to keep its tones apart: 479 samples in a realis");
}

TEST_CASE("realisations: behind a change of the rate they are whole cycles of it", "[judge]") {
    Plan plan = test::moving_average_plan();
    FilterStage stage;
    stage.design = FirDecimator{{0.1, 0.2, 0.4, 0.2, 0.1}, 4};
    plan.filter = {stage};
    const Rule band =
        test::rule(plan, "response", values({{"bands", std::vector<std::vector<double>>{{74.0, 76.0, -90.0, 1.0}}}}));
    const auto made = [&](std::int64_t length, std::int64_t at) {
        return test::a_case(plan, "sine",
                            values({{"frequency_hz", 75.0},
                                    {"length_samples", length},
                                    {"at_samples", at},
                                    {"realisations", std::int64_t{10}}}),
                            {band});
    };
    CHECK(refusals(plan, made(5120, 0)).empty());
    CHECK(measured_realisations(plan, made(5120, 0)) == MeasuredRealisations{0, 128, 10});
    // Samples 0 to 5 are silent; 0 and 4 return a sample, so the first that belongs to the tone is the third.
    CHECK(measured_realisations(plan, made(5128, 6)) == MeasuredRealisations{2, 128, 10});
    CHECK(measured_realisations(plan, discarding(made(5128, 6), 8)) == MeasuredRealisations{0, 128, 10});
    CHECK(measured_realisations(plan, discarding(made(5128, 6), 12)) == MeasuredRealisations{127, 128, 9});
    const auto found = refusals(plan, made(5104, 4));
    REQUIRE(found.size() == 1);
    CHECK(found[0].problem ==
          "case \"a case\" sends realisations of 510 samples, and its filter, which returns 1 for 4, needs a multiple "
          "of 4");
    CHECK(found[0].remedy == "send 5120 samples from index 4 on");
    CHECK(refusals(plan, made(5124, 4)).empty());
}
