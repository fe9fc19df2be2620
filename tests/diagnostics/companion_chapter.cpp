// What is said of a case that is to be sent once more: by the reader, by the judge, and of a recorded run.
#include <algorithm>
#include <bit>
#include <limits>
#include <memory>
#include <variant>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/judge/case_judge.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "runner/base_capture.hpp"
#include "runner/config/plan_file.hpp"
#include "runner/report/rule_report.hpp"
#include "tests/diagnostics/plan_page.hpp"
#include "tests/diagnostics/workshop.hpp"

namespace halflsb::diagnostics {

namespace {

const TextStyle style{false, 110, false};

const std::string repeat = "[[case.rule]]\nkind = \"repeat\"\n", blocks = "[[case.rule]]\nkind = \"blocks\"\n",
                  shift = "[[case.rule]]\nkind = \"shift\"\n", linearity = "[[case.rule]]\nkind = \"linearity\"\n";

/// What a right board returns on its only channel.
std::vector<Code> right_response(const Plan& plan, const Case& the_case) {
    const auto length = static_cast<std::size_t>(the_case.stimulus->length_samples());
    std::vector<Code> codes(length);
    std::vector<double> in(length), out(length);
    fill_case_codes(plan, the_case, 0, codes);
    values_of(plan.signal.input, codes, in);
    make_declared_filter(*described_channel(plan, the_case, 1), 1.0)->process(in, out);
    for (std::size_t n = 0; n < length; ++n) codes[n] = code_of(plan.signal.output, out[n], Rounding::half_up);
    return codes;
}

BaseResponse base_of(std::vector<Code> codes) {
    BaseResponse base;
    base.samples = static_cast<std::int64_t>(codes.size());
    base.block_samples = 256;
    const auto kept = std::make_shared<const std::vector<Code>>(std::move(codes));
    base.read = [kept](std::int64_t first, std::span<Code> out) -> Outcome<void> {
        std::copy_n(kept->begin() + first, out.size(), out.begin());
        return {};
    };
    return base;
}

std::string judged(const Plan& plan, const Case& the_case, BaseResponse base, const std::vector<Code>& response) {
    CaseJudge judge(plan, the_case, false, std::move(base));
    judge.add(response);
    const auto judgement = judge.finish({});
    if (!judgement) return to_text(judgement.error());
    std::string text;
    for (const RuleVerdict& verdict : judgement->rules) text += rule_block(verdict, plan.signal, style);
    return text;
}

void show_words(Page& page) {
    const auto show = [&](std::string_view done, const std::string& rule) {
        Parts parts;
        parts.after = rule;
        show_plan(page, done, parts.text());
    };
    show("a block size twice", blocks + "block_samples = [7, 7]\n");
    std::string many;
    for (int i = 1; i <= 17; ++i) many += (i > 1 ? ", " : "") + std::to_string(i);
    show("too many shifts", shift + "by_samples = [" + many + "]\n");
    show("a ratio of 0", linearity + "by_ratio = [0]\n");
    show("a repeat of two names", repeat + repeat);
}

void show_cases(Page& page) {
    Parts parts;
    const auto show = [&](std::string_view done, const std::string& rule) {
        parts.after = rule;
        show_plan(page, done, parts.text());
        parts = {};
    };
    parts.of_case = "start = \"running\"\ndiscard_samples = 64\n";
    show("a repeat of a running case", repeat);
    parts.filter = "kind = \"one-pole\"\nshift_bits = 3\n";
    parts.of_case = "start = \"flush\"\n";
    show("a repeat behind a flush of a loop that rounds", repeat);
    parts.filter = "kind = \"moving-average\"\npoints = 4\ninitial = \"growing\"\n";
    show("a shift of a filter with a start of its own", shift);
    parts.stimulus = "shape = \"noise\"\nlength_samples = 100\n";
    show("blocks as long as the stimulus", blocks + "block_samples = [100]\n");
    parts.stimulus = "shape = \"noise\"\nlength_samples = 1\n";
    show("blocks of a stimulus of one sample", blocks);
    parts.stimulus = "shape = \"noise\"\nlength_samples = 100\n";
    show("itself added so late that nothing is left", linearity + "by_samples = [100]\n");
    parts.stimulus = "shape = \"ramp\"\nfrom_ratio = 0.0\nto_ratio = 0.9\nlength_samples = 100\n";
    show("a ramp scaled beyond the word", linearity + "by_ratio = [2]\n");
    parts.stimulus = "shape = \"silence\"\nlength_samples = 100\n";
    show("linearity of silence", linearity);
    parts.filter = "kind = \"median\"\npoints = 5\n";
    parts.stimulus = "shape = \"noise\"\nlength_samples = 100\nlevel_ratio = 0.4\n";
    show("linearity of a median", linearity + "max_lsb = 1\n");
    parts.filter = "kind = \"unknown\"\n";
    parts.rule = "kind = \"repeat\"\n";
    parts.stimulus = "shape = \"noise\"\nlength_samples = 100\nlevel_ratio = 0.4\n";
    show("linearity of an unknown filter without a limit", linearity);
    parts.signal = "rate_hz = 1200.0\ninput = \"f32\"\noutput = \"f32\"\n";
    parts.rule = "kind = \"error\"\nmax_ratio = 0.001\n";
    parts.stimulus = "shape = \"noise\"\nlength_samples = 100\nlevel_ratio = 0.1\n";
    show("linearity by 3 in floats without a limit", linearity + "by_ratio = [3]\n");
    parts.filter = "kind = \"one-pole\"\nshift_bits = 3\ninitial = \"first-sample\"\n";
    parts.stimulus = "shape = \"noise\"\nlength_samples = 100\nlevel_ratio = 0.4\n";
    show("linearity within a derived limit that there is not", linearity);
    parts.filter = "kind = \"cic-decimator\"\norder = 2\nfactor = 4\n";
    show("a shift within a rate cycle", shift + "by_samples = [6]\n");
    parts.stimulus = "shape = \"noise\"\nlength_samples = 100\n";
    parts.of_case = "[case.each]\n\"stimulus.seed\" = [" + [] {
        std::string seeds = "1";
        for (int i = 2; i <= 5001; ++i) seeds += ", " + std::to_string(i);
        return seeds;
    }() + "]\n";
    FakeFiles files;
    parts.after = repeat;
    const std::string text = spoilt(parts.text(), parts.of_case, "") + parts.of_case;
    files.contents["plan.toml"] = text;
    const auto read = read_plan("plan.toml", files);
    const auto* problems = std::get_if<ReadProblems>(&read);
    page.show("5001 cases, each sent twice", problems == nullptr ? "" : problems->texts.front());
}

Plan plan_of(const std::string& rule, const std::string& stimulus, const std::string& signal = Parts{}.signal) {
    Parts parts;
    parts.signal = signal;
    if (signal != Parts{}.signal) parts.rule = "kind = \"error\"\nmax_ratio = 0.001\n";
    parts.stimulus = stimulus;
    parts.after = rule;
    FakeFiles files;
    files.contents["plan.toml"] = parts.text();
    auto read = read_plan("plan.toml", files);
    return std::holds_alternative<Plan>(read) ? std::get<Plan>(std::move(read)) : Plan{};
}

void show_verdicts(Page& page) {
    const std::string noise = "shape = \"noise\"\nlength_samples = 1000\nlevel_ratio = 0.4\n";
    using Spoil = std::vector<Code> (*)(std::vector<Code>);
    const auto show_of = [&](std::string_view done, const Plan& plan, BaseResponse base, std::vector<Code> response) {
        if (plan.cases.size() < 2) return page.missing(done);
        page.show(done, judged(plan, plan.cases.back(), std::move(base), response));
    };
    const auto show = [&](std::string_view done, const std::string& rule, Spoil spoil) {
        const Plan plan = plan_of(rule, noise);
        if (plan.cases.size() < 2) return page.missing(done);
        show_of(done, plan, base_of(right_response(plan, plan.cases[0])),
                spoil(right_response(plan, plan.cases.back())));
    };
    show("sent again, and one code is another", repeat, [](std::vector<Code> r) { return r[500] += 3, r; });
    show("sent again, and the first codes are others", repeat,
         [](std::vector<Code> r) { return r[0] += 9, r[1] -= 4, r; });
    show("in blocks of 7, and each first one differs", blocks + "block_samples = [7]\n", [](std::vector<Code> r) {
        for (std::size_t n = 7; n < r.size(); n += 7) r[n] += 2;
        return r;
    });
    show("later, and one code is another", shift, [](std::vector<Code> r) { return r[500] += 3, r; });
    show("turned over, and the mean is off", linearity + "bias_lsb = 0.25\nmax_lsb = 2\n", [](std::vector<Code> r) {
        for (Code& code : r) code -= 1;
        return r;
    });
    const Plan again = plan_of(repeat, noise);
    const auto right = right_response(again, again.cases.back());
    show_of("nothing was captured of the base", again, {}, right);
    show_of("the base was captured in part", again, base_of({right.begin(), right.begin() + 400}), right);
    Case nameless = again.cases.back();
    const auto missing = [&](std::string_view done, const CaseResult* base) {
        const FakeFiles files;
        auto response = base_response(nameless, base, "", "", again.signal, 256, files);
        if (response) show_of(done, again, std::move(*response), right);
    };
    missing("the base did not run", nullptr);
    CaseResult invalid;
    invalid.invalid = Error{ErrorKind::bench, "uart", "the board is silent", ""};
    missing("the base is invalid", &invalid);
    const Plan in_blocks = plan_of(blocks + "block_samples = [300]\n", noise);
    show_of("blocks as the base was sent", in_blocks, base_of(right), right);
    const Plan steep = plan_of(linearity + "by_ratio = [2]\n",
                               "shape = \"ramp\"\nfrom_ratio = 0.0\nto_ratio = "
                               "0.499\nlength_samples = 1000\n");
    auto clipped = right_response(steep, steep.cases.back());
    clipped[700] = 32767;
    show_of("a response that stands at the end of its word", steep, base_of(right_response(steep, steep.cases[0])),
            clipped);
    clipped[0] = 32767;
    show_of("a response that clips from its first sample on", steep, base_of(right_response(steep, steep.cases[0])),
            clipped);
    show_of("no sample came", steep, base_of(right_response(steep, steep.cases[0])), {});
    Parts loud;
    loud.filter = "kind = \"fir\"\ntaps = [1.5]\n";
    loud.stimulus = "shape = \"ramp\"\nfrom_ratio = 0.0\nto_ratio = 0.45\nlength_samples = 1000\n";
    loud.after = linearity + "by_ratio = [2]\n";
    FakeFiles files;
    files.contents["plan.toml"] = loud.text();
    const auto read = read_plan("plan.toml", files);
    if (const auto* plan = std::get_if<Plan>(&read)) {
        show_of("an output that clips, on paper", *plan, base_of(right_response(*plan, plan->cases[0])),
                right_response(*plan, plan->cases.back()));
    }
    const Plan floats =
        plan_of(linearity + "max_ratio = 0.001\n", noise, "rate_hz = 1200.0\ninput = \"f32\"\noutput = \"f32\"\n");
    auto broken = right_response(floats, floats.cases.back());
    broken[500] = std::bit_cast<Code>(std::numeric_limits<float>::quiet_NaN());
    show_of("a response that is not a number", floats, base_of(right_response(floats, floats.cases[0])), broken);
    Plan alone = again;
    alone.cases[0].rules = alone.cases[1].rules;
    page.show("a rule whose companions nobody made", judged(alone, alone.cases[0], {}, right));
}

void show_records(Page& page) {
    const std::string plan = R"(title = "CW-7 load cell"
[signal]
rate_hz = 1200.0
input = "q15"
output = "q15"
filter = "average"
[[filter]]
kind = "moving-average"
points = 16
[[case]]
name = "belt noise"
[case.stimulus]
shape = "noise"
length_samples = 1000
)";
    const std::string another =
        "[[case]]\nname = \"belt noise [repeat]\"\n[case.stimulus]\nshape = \"noise\"\n"
        "length_samples = 1000\n[[case.rule]]\nkind = \"error\"\nmax_lsb = 1\n";
    const std::string error = "[[case.rule]]\nkind = \"error\"\nmax_lsb = 1\n";
    Workshop workshop;
    workshop.write("plan.toml", plan + repeat);
    workshop.record("plan.toml", "run");
    workshop.write("other.toml", plan + error + another);
    page.show("a plan in which a companion is a case of its own", workshop.said_by({"judge", "run", "other.toml"}));
    workshop.record("other.toml", "own");
    page.show("a plan in which a case of its own is a companion", workshop.said_by({"judge", "own", "plan.toml"}));
}

}  // namespace

void companion_chapter(Page& page) {
    page.chapter("Cases that are sent once more");
    show_words(page);
    show_cases(page);
    page.chapter("Cases that were sent once more, judged");
    show_verdicts(page);
    show_records(page);
}

}  // namespace halflsb::diagnostics
