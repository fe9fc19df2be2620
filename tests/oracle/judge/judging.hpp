// A case judged in one go, as the runner would do it in blocks.
#pragma once

#include <algorithm>
#include <catch2/catch.hpp>
#include <vector>

#include "oracle/judge/case_judge.hpp"

namespace halflsb::test {

/// `block` counts instants. Plots are made beside, which must change nothing. `replays`, when given, counts how often the capture was read again.
inline CaseJudgement judge(const Plan& plan, const Case& the_case, const std::vector<Code>& response,
                           std::size_t block = 256, int* replays = nullptr) {
    const auto channels = static_cast<std::size_t>(plan.signal.channels);
    CaseJudge judge(plan, the_case, true);
    for (std::size_t first = 0; first < response.size(); first += block * channels)
        judge.add(std::span(response).subspan(first, std::min(block * channels, response.size() - first)));
    auto judgement = judge.finish([&](std::int64_t first, std::span<Code> codes) -> Outcome<void> {
        if (replays != nullptr) ++*replays;
        std::copy_n(response.begin() + first * static_cast<std::int64_t>(channels), codes.size(), codes.begin());
        return {};
    });
    REQUIRE(judgement);
    return *judgement;
}

/// Each channel `lag` instants later, zeros before; `silence` is the code of 0.
inline std::vector<Code> delayed(const std::vector<Code>& response, int lag, std::size_t channels = 1,
                                 Code silence = 0) {
    std::vector<Code> late(response.size(), silence);
    const auto shift = static_cast<std::ptrdiff_t>(channels) * lag;
    for (std::size_t n = 0; n < late.size(); ++n) {
        const auto from = static_cast<std::ptrdiff_t>(n) - shift;
        if (from >= 0 && from < static_cast<std::ptrdiff_t>(late.size()))
            late[n] = response[static_cast<std::size_t>(from)];
    }
    return late;
}

}  // namespace halflsb::test
