// 1,000,000,000 samples of one channel judged by a drift rule in 64 MiB: a CaseJudge without a board.
//
//   drift_memory [SAMPLES]      prints  what | required | reached ; status 1 when that was not reached
//
// The response is an integer moving average whose output rises by 10 LSB over the run: 10 n / samples, rounded up or
// down at random, so that its mean is the line itself. The change that the rule tells must be 10 LSB, which it is only
// when no stretch of the run was left out. One limit lies above, so it passes, and one below, so it fails.
#include <algorithm>
#include <cmath>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <ctime>
#include <string>
#include <vector>

#include "tests/long/judged_here.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

constexpr std::int64_t least_samples = 1'000'000;
constexpr std::size_t block_samples = 256;
constexpr double rise_lsb = 10.0, most_mib = 64.0;

Plan a_plan() {
    Plan plan;
    plan.title = "drift in constant memory";
    plan.signal.rate_hz = 1200.0;
    plan.signal.input = plan.signal.output = *sample_format("q15");
    FilterStage stage;
    stage.design = MovingAverage{static_cast<int>(averaged_points)};
    plan.filter.push_back(stage);
    return plan;
}

Case a_case(const Plan& plan, std::int64_t samples) {
    Case made;
    made.name = made.shape = "noise";
    made.stimulus_values.set("length_samples", samples);
    made.stimulus_values.set("level_ratio", 0.5);
    made.stimulus = value_of(make_stimulus("noise", made.stimulus_values, {plan.signal.rate_hz, plan.signal.input}));
    // What rounding may feign, 1.5 LSB, stands on either side of the rise.
    DriftRule passes, fails;
    passes.change = Limit{rise_lsb + 2.0, Limit::In::lsb};
    fails.change = Limit{rise_lsb - 2.0, Limit::In::lsb};
    made.rules = {{passes, {}}, {fails, {}}};
    return made;
}

/// 0 .. 1, of Marsaglia's xorshift (2003): cheap, and nothing here hangs on its quality.
class Dither {
public:
    double next() {
        state_ ^= state_ << 13;
        state_ ^= state_ >> 7;
        state_ ^= state_ << 17;
        return static_cast<double>(state_ >> 11) * 0x1p-53;
    }

private:
    std::uint64_t state_ = 88172645463325252ULL;
};

void check_verdicts(const CaseJudgement& judgement, std::int64_t samples) {
    if (judgement.rules.size() != 2) give_up("a rule has no verdict");
    for (const RuleVerdict& verdict : judgement.rules) {
        if (verdict.figures.size() != 1 || !verdict.figures[0].value || !verdict.figures[0].uncertainty)
            give_up("no figure: " + verdict.reason);
    }
    const JudgedFigure& change = judgement.rules[0].figures[0];
    // A dithered line has no bound of 1.5 LSB: six deviations of the noise, whose variance is at most 1/4 LSB^2 of the
    // dither and 1/12 of the average's rounding; over the run least squares leave 12 / N of it (drift_test.cpp).
    const double noise = std::sqrt(12.0 / static_cast<double>(samples)) * std::sqrt(1.0 / 3.0);
    if (std::fabs(*change.value - rise_lsb) > 6.0 * noise) give_up("told a change of " + std::to_string(*change.value));
    if (judgement.rules[0].verdict != Verdict::pass) give_up("12 LSB were allowed: " + judgement.rules[0].reason);
    if (judgement.rules[1].verdict != Verdict::fail) give_up("8 LSB were allowed, and it did not fail");
}

int run(std::int64_t samples) {
    const Plan plan = a_plan();
    const Case the_case = a_case(plan, samples);
    CaseJudge judge(plan, the_case);
    MovingAverageBoard board;
    Dither dither;
    std::vector<Code> sent, response;
    const double step = rise_lsb / static_cast<double>(samples);
    for (std::int64_t first = 0; first < samples; first += static_cast<std::int64_t>(sent.size())) {
        sent.resize(static_cast<std::size_t>(std::min<std::int64_t>(block_samples, samples - first)));
        fill_case_codes(plan, the_case, first, sent);
        response.resize(sent.size());
        for (std::size_t i = 0; i < sent.size(); ++i) {
            const double risen = step * static_cast<double>(first + static_cast<std::int64_t>(i));
            response[i] = board.step(sent[i]) + static_cast<Code>(std::floor(risen + dither.next()));
        }
        judge.add(response);
    }
    const CaseJudgement judgement = value_of(judge.finish([](std::int64_t, std::span<Code>) -> Outcome<void> {
        return Error{ErrorKind::defect, {}, "the response was asked for again", {}};
    }));
    check_verdicts(judgement, samples);
    const double peak = peak_mib();
    const bool holds = peak < most_mib;
    std::printf(
        "%lld samples judged by a drift rule: resident memory | < %.0f MiB | %.1f MiB at the peak; a rise of %.0f LSB "
        "over the run was told as %.4f; %.0f s of processor time%s\n",
        static_cast<long long>(samples), most_mib, peak, rise_lsb, *judgement.rules[0].figures[0].value,
        static_cast<double>(std::clock()) / CLOCKS_PER_SEC, holds ? "" : " MISSED");
    return holds ? 0 : 1;
}

}  // namespace

int main(int count, char** arguments) {
    const std::int64_t samples = count > 1 ? std::atoll(arguments[1]) : 1'000'000'000;
    if (samples < least_samples) give_up("give 1000000 samples or more");
    return run(samples);
}
