// Companions of a case for tests: made, answered by a board that is a function, judged.
#pragma once

#include <algorithm>
#include <catch2/catch.hpp>
#include <functional>
#include <memory>
#include <vector>

#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/companion_case.hpp"
#include "tests/support/plans.hpp"

namespace halflsb::test {

using Board = std::function<std::vector<Code>(const Plan&, const Case&)>;

/// The plan with the case and what its rules have sent again.
inline Plan with_case(Plan plan, const Case& the_case) {
    plan.cases = with_companions(plan, the_case);
    return plan;
}

inline BaseResponse base_of(std::vector<Code> codes, std::size_t channels = 1, std::int64_t block_samples = 256) {
    BaseResponse base;
    base.samples = static_cast<std::int64_t>(codes.size() / channels);
    base.block_samples = block_samples;
    const auto kept = std::make_shared<const std::vector<Code>>(std::move(codes));
    base.read = [kept, channels](std::int64_t first, std::span<Code> out) -> Outcome<void> {
        const auto from = static_cast<std::size_t>(first) * channels;
        REQUIRE(from + out.size() <= kept->size());
        std::copy_n(kept->begin() + static_cast<std::ptrdiff_t>(from), out.size(), out.begin());
        return {};
    };
    return base;
}

inline std::vector<RuleVerdict> verdicts_of(const Plan& plan, const Case& companion, BaseResponse base,
                                            const std::vector<Code>& response, std::size_t block = 100) {
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    CaseJudge judge(plan, companion, true, std::move(base));
    for (std::size_t first = 0; first < response.size(); first += block * channels)
        judge.add(std::span(response).subspan(first, std::min(block * channels, response.size() - first)));
    const auto judgement = judge.finish({});
    REQUIRE(judgement);
    CHECK_FALSE(judgement->latency_told);
    CHECK_FALSE(judge.is_decided());
    return judgement->rules;
}

/// Of the only companion, on one channel, where the same board answers both.
inline RuleVerdict verdict_with(const Plan& plan, const Board& board, const Board& second) {
    REQUIRE(plan.cases.size() == 2);
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    const auto all =
        verdicts_of(plan, plan.cases[1], base_of(board(plan, plan.cases[0]), channels), second(plan, plan.cases[1]));
    REQUIRE(all.size() == channels);
    return all.front();
}
inline RuleVerdict verdict_with(const Plan& plan, const Board& board) { return verdict_with(plan, board, board); }

}  // namespace halflsb::test
