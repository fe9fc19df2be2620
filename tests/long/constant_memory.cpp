// 100,000,000 samples through stimulus, oracle and error in constant memory: a CaseJudge without a board.
//
//   constant_memory [SAMPLES]      prints  what | required | reached ; status 1 when that was not reached
//
// The response is an integer moving average made here, right but for its last sample, which is one LSB too
// high. So the first bad sample must be the last one: all before it were looked at and found right, and the
// last was looked at too.
#include <algorithm>
#include <array>
#include <cstdint>
#include <cstdio>
#include <cstdlib>
#include <fstream>
#include <string>
#include <utility>
#include <vector>

#include "oracle/judge/case_judge.hpp"

using namespace halflsb;

namespace {

constexpr std::int64_t first_look_samples = 1'000'000;
constexpr std::size_t points = 16, block_samples = 256;
constexpr double most_growth_mib = 4.0;

[[noreturn]] void give_up(const std::string& why) {
    std::fprintf(stderr, "constant_memory: %s\n", why.c_str());
    std::exit(1);
}

/// Of this program's own memory. Not getrusage(): its peak is that of the process before exec, too, and a
/// large parent would hide growth.
double peak_mib() {
    std::ifstream status("/proc/self/status");
    for (std::string word; status >> word;) {
        double kib = 0.0;
        if (word == "VmHWM:" && status >> kib) return kib / 1024.0;
    }
    give_up("/proc/self/status tells no peak");
}

template <class T>
T value_of(Outcome<T> outcome) {
    if (!outcome) give_up(to_text(outcome.error()));
    return std::move(outcome).value();
}

Plan a_plan() {
    Plan plan;
    plan.title = "constant memory";
    plan.signal.rate_hz = 1200.0;
    plan.signal.input = plan.signal.output = *sample_format("q15");
    FilterStage stage;
    stage.design = MovingAverage{static_cast<int>(points)};
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

/// The mean of the last 16 codes, rounded half up, as firmware would: a sum that runs.
class Board {
public:
    Code step(Code in) {
        sum_ += in - line_[at_];
        line_[at_] = in;
        at_ = (at_ + 1) % points;
        const std::int64_t rounded = sum_ + static_cast<std::int64_t>(points / 2);
        return static_cast<Code>(rounded >= 0 ? rounded / 16 : -((-rounded + 15) / 16));
    }

private:
    std::array<std::int64_t, points> line_{};
    std::size_t at_ = 0;
    std::int64_t sum_ = 0;
};

const RuleVerdict& verdict_on(const CaseJudgement& judgement, std::size_t kind) {
    for (const RuleVerdict& verdict : judgement.rules) {
        if (verdict.rule.kind.index() == kind) return verdict;
    }
    give_up("a rule has no verdict");
}

int run(std::int64_t samples) {
    const Plan plan = a_plan();
    const Case the_case = a_case(plan, samples);
    CaseJudge judge(plan, the_case);
    Board board;
    std::vector<Code> codes;
    double early_mib = 0.0;
    for (std::int64_t first = 0; first < samples; first += static_cast<std::int64_t>(codes.size())) {
        if (first >= first_look_samples && early_mib == 0.0) early_mib = peak_mib();
        codes.resize(static_cast<std::size_t>(std::min<std::int64_t>(block_samples, samples - first)));
        fill_codes(*the_case.stimulus, plan.signal.input, plan.signal.quantise, first, codes);
        for (Code& code : codes) code = board.step(code);
        if (first + static_cast<std::int64_t>(codes.size()) == samples) codes.back() += 1;
        judge.add(codes);
    }
    const CaseJudgement judgement = value_of(judge.finish([](std::int64_t, std::span<Code>) -> Outcome<void> {
        return Error{ErrorKind::defect, {}, "the response was asked for again", {}};
    }));
    const double late_mib = peak_mib();

    const RuleVerdict& error = verdict_on(judgement, 0);
    if (verdict_on(judgement, 1).verdict != Verdict::pass) give_up("latency: " + verdict_on(judgement, 1).reason);
    if (verdict_on(judgement, 2).verdict != Verdict::pass) give_up("response: " + verdict_on(judgement, 2).reason);
    if (error.verdict != Verdict::fail || !error.first_bad) give_up("the wrong last sample was not seen");
    if (error.first_bad->index != samples - 1) {
        give_up("sample " + std::to_string(error.first_bad->index) + " is called the first bad one");
    }
    const bool holds = early_mib > 0.0 && late_mib - early_mib < most_growth_mib;
    std::printf(
        "%lld samples through stimulus, oracle and error: growth of memory after the first %lld | < %.0f MiB | "
        "%.2f MiB, from %.1f to %.1f MiB at the peak; the one bad sample, the last, was found%s\n",
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
