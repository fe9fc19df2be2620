// 100,000,000 samples of two channels through stimulus, oracle and rules in constant memory: a CaseJudge without a
// board.
//
//   constant_memory [SAMPLES]      prints  what | required | reached ; status 1 when that was not reached
//
// The responses are integer moving averages made here, right but for the last sample of channel 2, which is one LSB
// too high. So the first bad sample must be the last one: all before it were looked at and found right, and the
// last was looked at too. The baseline of `unchanged` has the right samples, of which it keeps 1000 and the hash of
// each of 256 stretches: it must find the change in the last stretch.
#include <algorithm>
#include <array>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <string>
#include <utility>
#include <vector>

#include "oracle/judge/case_judge.hpp"
#include "tests/long/judged_here.hpp"
#include "tests/support/accepted.hpp"

using namespace halflsb;
using namespace halflsb::test;

namespace {

constexpr std::int64_t first_look_samples = 1'000'000;
constexpr std::size_t block_samples = 256, channels = 2;
constexpr std::int64_t kept_samples = 1000, stretches = 256;
constexpr double most_growth_mib = 4.0;

Plan a_plan() {
    Plan plan;
    plan.title = "constant memory";
    plan.signal.rate_hz = 1200.0;
    plan.signal.channels = static_cast<int>(channels);
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
    made.stimulus_values.set("level_ratio", 1.0);
    made.stimulus = value_of(make_stimulus("noise", made.stimulus_values, {plan.signal.rate_hz, plan.signal.input}));
    ErrorRule error;
    error.largest = Limit{0.5, Limit::In::lsb};
    ResponseRule response;  // the loosest: it is here for the memory of its estimator
    response.bands.push_back({10.0, 60.0, -60.0, 60.0});
    made.rules = {{error, {}}, {LatencyRule{0, false}, {}}, {response, {}}};
    return made;
}

/// What the board returns, block by block from the start.
class Responses {
public:
    Responses(const Plan& plan, const Case& the_case, std::int64_t samples)
        : plan_(plan), case_(the_case), samples_(samples) {}
    std::int64_t first_index() const { return first_; }
    bool is_over() const { return first_ == samples_; }
    /// Codes sent and returned; at most one block, and none of it beyond `end`.
    void next(std::vector<Code>& sent, std::vector<Code>& response, std::int64_t end) {
        const auto count = std::min<std::int64_t>(block_samples, std::min(end, samples_) - first_);
        sent.resize(static_cast<std::size_t>(count) * channels);
        fill_case_codes(plan_, case_, first_, sent);
        response.resize(sent.size());
        for (std::size_t i = 0; i < sent.size(); ++i) response[i] = boards_[i % channels].step(sent[i]);
        first_ += count;
    }

private:
    const Plan& plan_;
    const Case& case_;
    std::int64_t samples_;
    std::int64_t first_ = 0;
    std::array<MovingAverageBoard, channels> boards_;
};

/// The baseline of the right responses, hashed as they come.
AcceptedResponse a_baseline(const Plan& plan, const Case& the_case, std::int64_t samples) {
    AcceptedResponse made;
    made.origin = "baseline";
    made.samples = samples;
    made.block_samples = (samples + stretches - 1) / stretches;
    made.make_digest = [] { return std::make_unique<test::FnvDigest>(); };
    test::FnvDigest all_sent, all_returned;
    std::vector<Code> sent, response;
    for (Responses responses(plan, the_case, samples); !responses.is_over();) {
        const std::int64_t end = std::min(responses.first_index() + made.block_samples, samples);
        test::FnvDigest stretch;
        while (responses.first_index() < end) {
            responses.next(sent, response, end);
            all_sent.add(plan.signal.input, sent);
            all_returned.add(plan.signal.output, response);
            stretch.add(plan.signal.output, response);
            for (std::size_t i = 0; i < response.size() && made.kept.size() < kept_samples * channels; ++i)
                made.kept.push_back(response[i]);
        }
        made.block_sha256.push_back(stretch.value());
    }
    made.stimulus_sha256 = all_sent.value();
    made.response_sha256 = all_returned.value();
    return made;
}

/// On a kind of rule, of a channel counted from 1 (0: of all together).
const RuleVerdict& verdict_on(const CaseJudgement& judgement, std::string_view kind, int channel) {
    for (const RuleVerdict& verdict : judgement.rules) {
        if (kind_name(verdict.rule) == kind && verdict.channel == channel) return verdict;
    }
    give_up("a rule has no verdict");
}

void check_verdicts(const CaseJudgement& judgement, std::int64_t samples, std::int64_t stretch_samples) {
    for (const int channel : {1, 2}) {
        for (const std::string_view kind : {"latency", "response"}) {
            const RuleVerdict& verdict = verdict_on(judgement, kind, channel);
            if (verdict.verdict != Verdict::pass) give_up(std::string(kind) + ": " + verdict.reason);
        }
    }
    if (verdict_on(judgement, "error", 1).verdict != Verdict::pass) give_up("channel 1 was right and did not pass");
    const RuleVerdict& error = verdict_on(judgement, "error", 2);
    if (error.verdict != Verdict::fail || !error.first_bad) give_up("the wrong last sample was not seen");
    if (error.first_bad->index != samples - 1)
        give_up("sample " + std::to_string(error.first_bad->index) + " is called the first bad one");
    const RuleVerdict& unchanged = verdict_on(judgement, "unchanged", 0);
    const std::string where = "lies in samples " + std::to_string((samples - 1) / stretch_samples * stretch_samples) +
                              " to " + std::to_string(samples - 1) + ",";
    if (unchanged.verdict != Verdict::fail || unchanged.reason.find(where) == std::string::npos)
        give_up("the change was not found in the last stretch: " + unchanged.reason);
}

int run(std::int64_t samples) {
    const Plan plan = a_plan();
    Case the_case = a_case(plan, samples);
    const AcceptedResponse baseline = a_baseline(plan, the_case, samples);
    the_case.rules.push_back(test::unchanged_rule(baseline));
    CaseJudge judge(plan, the_case);
    std::vector<Code> sent, response;
    double early_mib = 0.0;
    for (Responses responses(plan, the_case, samples); !responses.is_over();) {
        if (responses.first_index() >= first_look_samples && early_mib == 0.0) early_mib = peak_mib();
        responses.next(sent, response, samples);
        if (responses.is_over()) response.back() += 1;
        judge.add(response);
    }
    const CaseJudgement judgement = value_of(judge.finish([](std::int64_t, std::span<Code>) -> Outcome<void> {
        return Error{ErrorKind::defect, {}, "the response was asked for again", {}};
    }));
    const double late_mib = peak_mib();
    check_verdicts(judgement, samples, baseline.block_samples);

    const bool holds = early_mib > 0.0 && late_mib - early_mib < most_growth_mib;
    std::printf(
        "%lld samples of 2 channels through stimulus, oracle and rules: growth of memory after the first %lld | < %.0f "
        "MiB | %.2f MiB, from %.1f to %.1f MiB at the peak; the one bad sample, the last, was found%s\n",
        static_cast<long long>(samples), static_cast<long long>(first_look_samples), most_growth_mib,
        late_mib - early_mib, early_mib, late_mib, holds ? "" : " MISSED");
    return holds ? 0 : 1;
}

}  // namespace

int main(int count, char** arguments) {
    const std::int64_t samples = count > 1 ? std::atoll(arguments[1]) : 100'000'000;
    if (samples <= first_look_samples) give_up("give more than 1000000 samples");
    return run(samples);
}
