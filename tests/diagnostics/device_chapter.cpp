// The rules that look at the device: its time, its channels, its words.
#include <algorithm>
#include <cmath>
#include <string>
#include <vector>

#include "oracle/judge/case_judge.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/report/rule_report.hpp"
#include "runner/report/terminal_report.hpp"
#include "tests/diagnostics/plan_page.hpp"
#include "tests/diagnostics/right_board.hpp"
#include "tests/runner/report/sample_run.hpp"

namespace halflsb::diagnostics {

namespace {

const TextStyle style{false, 110, false};
const std::string noise = "shape = \"noise\"\nlength_samples = 4096\n";
const std::string of_case = "[[case.rule]]\n";

Parts with_rule(const std::string& rule, const std::string& stimulus = noise) {
    Parts parts;
    parts.stimulus = stimulus;
    parts.after = of_case + rule;
    return parts;
}

void show_refusals(Page& page) {
    const auto show = [&](std::string_view done, Parts parts) { show_plan(page, done, parts.text()); };
    show("a deadline without a limit", with_rule("kind = \"deadline\"\n"));
    show("a percentile without a limit", with_rule("kind = \"deadline\"\npercentile = 99\n"));
    show("a limit of no percentile", with_rule("kind = \"deadline\"\nmax_percentile_ticks = 99\n"));
    show("a percentile above the largest",
         with_rule("kind = \"deadline\"\nmax_ticks = 9\npercentile = 99\nmax_percentile_ticks = 10\n"));
    show("crosstalk without a limit", with_rule("kind = \"crosstalk\"\n"));
    show("crosstalk of one channel", with_rule("kind = \"crosstalk\"\nmax_lsb = 1\n"));
    const auto two = [](const std::string& rule, const std::string& stimulus) {
        Parts parts = with_rule(rule, stimulus);
        parts.signal += "channels = 2\n";
        return parts;
    };
    show("crosstalk where all are driven", two("kind = \"crosstalk\"\nmax_lsb = 1\n", noise));
    show("a coupling of a short case",
         two("kind = \"crosstalk\"\nmax_db = -60\n", "shape = \"noise\"\nlength_samples = 500\nchannel = 1\n"));
    show("a coupling of an impulse",
         two("kind = \"crosstalk\"\nmax_db = -60\n", "shape = \"impulse\"\nlength_samples = 5000\nchannel = 2\n"));
    show("headroom of a stimulus that drives nothing", with_rule("kind = \"headroom\"\n"));
    Parts parts = with_rule("kind = \"headroom\"\n");
    parts.filter = "kind = \"median\"\npoints = 5\n";
    show("headroom of a median", parts);
    parts.filter = "kind = \"cic-decimator\"\norder = 2\nfactor = 4\n";
    show("headroom of a decimator", parts);
    parts = with_rule("kind = \"headroom\"\n");
    parts.signal = "rate_hz = 1200.0\ninput = \"f32\"\noutput = \"f32\"\n";
    parts.rule = "kind = \"error\"\nmax_ratio = 0.1\n";
    show("headroom of floats", parts);
    parts.signal = "rate_hz = 1200.0\ninput = \"f32\"\noutput = \"q15\"\noutput_per_input = 1.0\n";
    parts.rule = "kind = \"error\"\nmax_lsb = 1\n";
    show("headroom of an input of floats", parts);
}

/// Of the case's rules, those that did not pass; of the others the reason.
std::string told(const Plan& plan, const std::vector<RuleVerdict>& rules) {
    std::string text;
    for (const RuleVerdict& rule : rules) {
        if (rule.verdict != Verdict::pass) {
            text += rule_block(rule, plan.signal, style);
        } else if (!rule.reason.empty()) {
            text += rule_title(rule) + ": pass; " + rule.reason + "\n";
        }
    }
    return text;
}

void show_deadlines(Page& page) {
    const auto show = [&](std::string_view done, const std::string& limits, const TickCounter& counter,
                          const std::vector<BlockTicks>& blocks) {
        FakeFiles files;
        files.contents["plan.toml"] =
            with_rule("kind = \"deadline\"\n" + limits, "shape = \"step\"\nlength_samples = 64\n").text();
        const auto read = read_plan("plan.toml", files);
        const Plan* plan = std::get_if<Plan>(&read);
        if (plan == nullptr) return page.missing(done);
        CaseJudge judge(*plan, plan->cases.front());
        judge.add(right_response(*plan));
        judge.add_ticks(counter, blocks);
        const auto judgement = judge.finish([](std::int64_t, std::span<Code>) -> Outcome<void> { return {}; });
        page.show(done, told(*plan, judgement->rules));
    };
    const TickCounter counter{168'000'000, 32};
    const std::vector<BlockTicks> steady(4, {16, 480, 30});
    const std::string limits = "max_ticks = 30\n";
    show("blocks in time", limits, counter, steady);
    auto slow = steady;
    slow[2] = {16, 900, 57};
    show("a block that is late",
         "max_ticks = 50\nmax_period_ratio = 0.0003\npercentile = 50\nmax_percentile_ticks = 40\n", counter, slow);
    show("no ticks", limits, counter, {});
    show("no counter", limits, {}, steady);
    show("a counter that stands still", limits, counter, std::vector<BlockTicks>(4, {16, 0, 0}));
    show("ticks that contradict themselves", limits, counter, {{16, 480, 30}, {48, 9999, 30}});
    show("ticks of a part", limits, counter, {{16, 480, 30}});
    show("a counter that wraps", "max_ticks = 5000\n", {1'000'000, 16}, steady);
    slow[2] = {16, 4'000'000'000, most_ticks_told};
    show("more ticks than can be told", "max_period_ratio = 999\n", counter, slow);
}

template <class Spoil>
void show_judged(Page& page, std::string_view done, const Parts& parts, Spoil spoil) {
    FakeFiles files;
    files.contents["plan.toml"] = parts.text();
    const auto read = read_plan("plan.toml", files);
    const Plan* plan = std::get_if<Plan>(&read);
    if (plan == nullptr) {
        for (const std::string& problem : std::get<ReadProblems>(read).texts) page.show(done, problem);
        return page.missing(done);
    }
    const Case& the_case = plan->cases.front();
    std::vector<Code> response = right_response(*plan);
    spoil(response);
    CaseJudge judge(*plan, the_case);
    judge.add(response);
    const auto judgement = judge.finish([&](std::int64_t first, std::span<Code> codes) -> Outcome<void> {
        std::copy_n(response.begin() + first * plan->signal.channels, codes.size(), codes.begin());
        return {};
    });
    page.show(done, told(*plan, judgement->rules));
}

void show_crosstalk(Page& page) {
    Parts parts = with_rule("kind = \"crosstalk\"\nmax_lsb = 100\nmax_db = -60\n", noise + "channel = 1\n");
    parts.signal += "channels = 2\n";
    parts.rule = "kind = \"error\"\nmax_lsb = 30000\n";
    const auto with = [](double amplitude, std::size_t late) {
        return [amplitude, late](std::vector<Code>& r) {
            for (std::size_t n = late; 2 * n + 1 < r.size(); ++n)
                r[2 * n + 1] += static_cast<Code>(std::lround(amplitude * r[2 * (n - late)]));
        };
    };
    show_judged(page, "no crosstalk", parts, [](std::vector<Code>&) {});
    show_judged(page, "crosstalk of a 128th, a sample late", parts, with(1.0 / 128.0, 1));
    parts.filter =
        "kind = \"moving-average\"\npoints = 4\nchannels = [1]\n[[filter]]\nkind = \"moving-average\"\n"
        "points = 8\nchannels = [2]\n";
    show_judged(page, "what comes through is what the driven channel returns", parts, with(1.0 / 16.0, 0));
    show_judged(page, "what comes through has passed the idle channel's filter", parts, [](std::vector<Code>& r) {
        // The mean of 4 becomes one of 8.
        const std::vector<Code> from = r;
        for (std::size_t n = 4; 2 * n + 1 < r.size(); ++n) r[2 * n + 1] += (from[2 * n] + from[2 * (n - 4)]) / 32;
    });
    parts.filter = "kind = \"fir\"\ntaps = [1.0]\n";
    show_judged(page, "what comes through was not filtered", parts, with(1.0 / 16.0, 0));
    Parts floats = with_rule("kind = \"crosstalk\"\nmax_ratio = 0.1\n", noise + "channel = 1\n");
    floats.signal = "rate_hz = 1200.0\ninput = \"f32\"\noutput = \"f32\"\nchannels = 2\n";
    floats.rule = "kind = \"latency\"\nlatency_samples = 0\n";
    show_judged(page, "an idle channel that is not a number", floats,
                [](std::vector<Code>& r) { r[1001] = 0x7fc00000; });
}

void show_headroom(Page& page) {
    Parts parts = with_rule("kind = \"headroom\"\n", "shape = \"step\"\nlevel_ratio = 1.0\nlength_samples = 64\n");
    parts.filter = "kind = \"fir\"\ntaps = [0.75, 0.75]\n";
    parts.rule = "kind = \"error\"\nmax_lsb = 32768\n";
    show_judged(page, "the output saturates as it was said to", parts, [](std::vector<Code>&) {});
    show_judged(page, "the output wraps", parts, [](std::vector<Code>& r) {
        for (std::size_t n = 1; n < r.size(); ++n) r[n] = 49150 - 65536;
    });
    show_judged(page, "a node that clips early", parts, [](std::vector<Code>& r) {
        for (Code& code : r) code = std::min(code, 20000);
    });
    show_judged(page, "another fault in one sample", parts, [](std::vector<Code>& r) { r[20] -= 40; });
    show_judged(page, "another fault in two samples", parts, [](std::vector<Code>& r) { r[20] -= 40, r[22] -= 40; });
}

void show_times(Page& page) {
    RunResult run = sample::run();
    run.cases[0].stream.ticks_per_sample = Spread{23.4, 31.0, 2140.0};
    run.cases[0].stream.round_trip_s = Spread{0.0042, 0.005, 0.0123};
    run.cases[0].rules[0].rule.kind = DeadlineRule{};
    page.show("the times of a case", case_text(run, 0, style));
}

}  // namespace

void device_chapter(Page& page) {
    page.chapter("Rules about time, channels and words: refused");
    show_refusals(page);
    page.chapter("Rules about time, channels and words: judged");
    show_deadlines(page);
    show_crosstalk(page);
    show_headroom(page);
    show_times(page);
}

}  // namespace halflsb::diagnostics
