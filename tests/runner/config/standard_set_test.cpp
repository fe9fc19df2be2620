// The cases of a plan that has none.
#include "runner/config/standard_set.hpp"

#include <algorithm>
#include <set>

#include "oracle/judge/admission.hpp"
#include "oracle/judge/derived_limits.hpp"
#include "runner/config/resolved_plan.hpp"
#include "stimuli/stimulus.hpp"
#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

const std::string signal_text = "title = \"CW-7\"\n[signal]\nrate_hz = 1200\ninput = \"q15\"\noutput = \"q15\"\n";
const std::string mean_text = "[[filter]]\nkind = \"moving-average\"\npoints = 16\n";
const std::string low_pass_text =
    "[[filter]]\nkind = \"butterworth\"\nresponse = \"low-pass\"\norder = 2\ncorner_hz = 24.0\n";
const std::string whole_arithmetic =
    "[arithmetic]\nrounding = \"half-up\"\naccumulator_bits = 32\noutput_overflow = \"saturate\"\n";

const Case& case_called(const Plan& plan, const std::string& name) {
    for (const Case& the_case : plan.cases) {
        if (the_case.name == name) return the_case;
    }
    FAIL("no case " + name);
    return plan.cases.front();
}

template <class Kind>
bool has(const Case& the_case) {
    return std::any_of(the_case.rules.begin(), the_case.rules.end(),
                       [](const Rule& rule) { return std::holds_alternative<Kind>(rule.kind); });
}

std::vector<Code> codes_of(const Plan& plan, const Case& the_case) {
    std::vector<Code> codes(static_cast<std::size_t>(the_case.stimulus->length_samples() * plan.signal.channels));
    fill_case_codes(plan, the_case, 0, codes);
    return codes;
}

}  // namespace

TEST_CASE("standard set: a plan of [signal] and [[filter]] alone is a plan", "[config]") {
    const Plan plan = plan_of(signal_text + mean_text);
    REQUIRE(plan.cases.size() >= 15);
    // faults.md 8.3: silence, impulses, steps, noise and ramp, full scale, tail, levels, a long run.
    CHECK(plan.cases[0].name == "silence");
    CHECK(plan.cases[1].name == "impulses");
    CHECK(plan.cases[2].name == "step up");
    CHECK(plan.cases.back().name == "long run");
    CHECK(plan.cases.back().labels == std::vector<std::string>{std::string(long_label)});
    std::set<std::string> names;
    for (const Case& the_case : plan.cases) {
        CHECK(the_case.is_standard);
        CHECK_FALSE(the_case.purpose.empty());
        CHECK(names.insert(the_case.name).second);
        CHECK(the_case.position.file == standard_set_name);
        CHECK(refusals(plan, the_case).empty());
        if (the_case.companion) continue;  // held against its base
        REQUIRE(has<ErrorRule>(the_case));
        const auto& error = std::get<ErrorRule>(the_case.rules.front().kind);
        CHECK(is_derived(error));
        // Nothing says how it rounds: no bit can be asked for.
        CHECK_FALSE(has<ExactRule>(the_case));
        REQUIRE(derived_limits(plan, the_case, 1));
    }
}

TEST_CASE("standard set: what is silent at its end is held to silence", "[config]") {
    const Plan plan = plan_of(signal_text + low_pass_text + "[filter.arithmetic]\ncoefficient_fraction_bits = 14\n");
    for (const Case& the_case : plan.cases)
        CHECK(has<SilenceRule>(the_case) == (the_case.name.rfind("silence", 0) == 0));
}

TEST_CASE("standard set: with the whole arithmetic every case asks for the bits", "[config]") {
    const Plan plan = plan_of(signal_text + whole_arithmetic + mean_text);
    for (const Case& the_case : plan.cases) {
        if (!the_case.companion) CHECK(has<ExactRule>(the_case));
    }
}

TEST_CASE("standard set: a short noise is sent again, and in other blocks", "[config]") {
    for (const std::string& filter :
         {mean_text, low_pass_text, std::string("[[filter]]\nkind = \"median\"\npoints = 5\n")}) {
        const Plan plan = plan_of(signal_text + filter);
        CHECK(has<RepeatRule>(case_called(plan, "noise, sent again [repeat]")));
        CHECK(has<BlocksRule>(case_called(plan, "noise, sent again [blocks 7]")));
        // They must cost little beside the rest: a frame has at most 20 bytes of its own.
        double all = 0.0, again = 0.0;
        for (const Case& the_case : plan.cases) {
            const auto length = static_cast<double>(the_case.stimulus->length_samples());
            const bool is_long = !the_case.labels.empty(), in_blocks = has<BlocksRule>(the_case);
            if (!is_long) (the_case.companion ? again : all) += in_blocks ? length * (1.0 + 10.0 / 7.0) : length;
        }
        CHECK(again < 0.05 * all);
    }
}

TEST_CASE("standard set: the impulses have the ends of the range, and ties of a filter with coefficients", "[config]") {
    const Plan mean = plan_of(signal_text + mean_text);
    const std::vector<Code> codes = codes_of(mean, case_called(mean, "impulses"));
    const std::set<Code> found(codes.begin(), codes.end());
    CHECK(found == std::set<Code>{-32768, -32767, 0, 1, 1000, 32767});
    const Plan fir =
        plan_of(signal_text + "[[filter]]\nkind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\ncoefficient_fraction_bits = 14\n");
    const std::vector<Code> with_ties = codes_of(fir, case_called(fir, "impulses"));
    CHECK(std::count(with_ties.begin(), with_ties.end(), 8192) == 1);
    CHECK(std::count(with_ties.begin(), with_ties.end(), -8192) == 1);
}

TEST_CASE("standard set: what drives the output the hardest comes to the sum of the taps' magnitudes", "[config]") {
    const Plan plan = plan_of(signal_text + "[[filter]]\nkind = \"fir\"\ntaps = [0.5, -0.25, 0.125, -0.5]\n");
    const std::vector<Code> codes = codes_of(plan, case_called(plan, "hardest for the output"));
    // In time: signs of -0.5, 0.125, -0.25, 0.5.
    const std::vector<Code> at_full_scale(codes.begin(), codes.begin() + 4);
    CHECK(std::vector<Code>{codes[0] < 0, codes[1] < 0, codes[2] < 0, codes[3] < 0} == std::vector<Code>{1, 0, 1, 0});
    double y = 0.0;
    const double h[] = {0.5, -0.25, 0.125, -0.5};
    for (int k = 0; k < 4; ++k) y += h[k] * static_cast<double>(at_full_scale[static_cast<std::size_t>(3 - k)]);
    CHECK(y == Approx(1.375 * 32768).margin(2.0));
}

TEST_CASE("standard set: lengths follow the filter's memory, and noise stays where its limits hold", "[config]") {
    const Plan fast = plan_of(signal_text + mean_text), slow = plan_of(signal_text + low_pass_text);
    CHECK(case_called(slow, "step up").stimulus->length_samples() >
          case_called(fast, "step up").stimulus->length_samples() + 100);
    // A butterworth of order 2 overshoots: noise at half scale times sum |h| must stay below full scale.
    for (const Plan* plan : {&fast, &slow}) {
        const std::vector<Code> codes = codes_of(*plan, case_called(*plan, "noise"));
        const double most = static_cast<double>(*std::max_element(codes.begin(), codes.end())) / 32768.0;
        CHECK(most * l1_norm(plan->filter) < 1.0);
        CHECK(most * l1_norm(plan->filter) > 0.3);
    }
}

TEST_CASE("standard set: rules for every case take the place of its own, where a case can answer them", "[config]") {
    const Plan plan = plan_of(signal_text + mean_text +
                              "[[rule]]\nkind = \"error\"\nmax_lsb = 2\n"
                              "[[rule]]\nkind = \"response\"\nbands = [{ from_hz = 10, to_hz = 20, max_db = 1 }]\n");
    int with_response = 0;
    for (const Case& the_case : plan.cases) {
        with_response += has<ResponseRule>(the_case) ? 1 : 0;
        for (const Rule& rule : the_case.rules) {
            const auto* error = std::get_if<ErrorRule>(&rule.kind);
            if (error != nullptr) CHECK(error->largest == Limit{2.0, Limit::In::lsb});
        }
    }
    CHECK(has<ResponseRule>(case_called(plan, "noise")));
    CHECK_FALSE(has<ResponseRule>(case_called(plan, "silence")));
    CHECK(with_response >= 1);
}

TEST_CASE("standard set: a rule that none of its cases can answer is refused where it stands", "[config]") {
    const std::string text =
        plan_problems(signal_text + "[[filter]]\nkind = \"median\"\npoints = 5\n" +
                      "[[rule]]\nkind = \"response\"\nbands = [{ from_hz = 10, to_hz = 20, max_db = 1 }]\n");
    CHECK_THAT(text, Catch::Matchers::StartsWith("plan.toml:9:1: no case of the standard set can answer this rule: "));
    CHECK_THAT(text, Catch::Matchers::Contains("add a [[case]] whose stimulus can: "));
}

TEST_CASE("standard set: an unknown filter has none", "[config]") {
    const std::string text = plan_problems(signal_text + "[[filter]]\nkind = \"unknown\"\n");
    CHECK_THAT(text, Catch::Matchers::Contains("the file has no [[case]]"));
    CHECK_THAT(text, Catch::Matchers::Contains("the standard set needs a filter that is known"));
}

TEST_CASE("standard set: every format, several channels and a rate that changes have one", "[config]") {
    for (const std::string format : {"q7", "q15", "q31", "i8", "i16", "i24", "i32", "u12", "u16", "f32"}) {
        INFO(format);
        const Plan plan = plan_of("title = \"t\"\n[signal]\nrate_hz = 1200\ninput = \"" + format + "\"\noutput = \"" +
                                  format + "\"\nchannels = 2\n" + mean_text);
        CHECK(plan.cases.size() >= 15);
        CHECK(case_called(plan, "channel 1 alone").channel == 1);
        CHECK(case_called(plan, "channel 2 alone").channel == 2);
    }
    const Plan decimator =
        plan_of(signal_text + "[[filter]]\nkind = \"fir-decimator\"\ntaps = [0.25, 0.5, 0.25]\nfactor = 3\n");
    CHECK(decimator.cases.size() >= 12);
}

TEST_CASE("standard set: the plan as it is understood has it written out, and reads back as the same plan",
          "[config]") {
    const std::string own = signal_text + whole_arithmetic + low_pass_text +
                            "[[rule]]\nkind = \"response\"\nbands = [{ from_hz = 10, to_hz = 20, max_db = 1 }]\n";
    FakeFiles files;
    files.contents["plan.toml"] = own;
    const auto printed = resolved_plan("plan.toml", files);
    REQUIRE(std::holds_alternative<std::string>(printed));
    const Plan written = plan_of(std::get<std::string>(printed)), made = plan_of(own);
    REQUIRE(written.cases.size() == made.cases.size());
    for (std::size_t i = 0; i < made.cases.size(); ++i) {
        CHECK(written.cases[i].name == made.cases[i].name);
        CHECK(written.cases[i].purpose == made.cases[i].purpose);
        CHECK_FALSE(written.cases[i].is_standard);
        CHECK(codes_of(written, written.cases[i]) == codes_of(made, made.cases[i]));
        REQUIRE(written.cases[i].rules.size() == made.cases[i].rules.size());
        std::multiset<std::string> kinds, read_back;
        for (const Rule& rule : made.cases[i].rules) kinds.insert(std::string(kind_name(rule)));
        for (const Rule& rule : written.cases[i].rules) read_back.insert(std::string(kind_name(rule)));
        CHECK(kinds == read_back);
    }
}
