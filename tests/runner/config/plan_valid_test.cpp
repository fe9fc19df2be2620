#include "tests/support/config_texts.hpp"

using namespace halflsb;

TEST_CASE("plan: a good one is read into what it says", "[config]") {
    const Plan plan = plan_of(good_plan);
    CHECK(plan.title == "CW-7 load cell");
    CHECK(plan.file == "plan.toml");
    CHECK(plan.signal.rate_hz == 1200.0);
    CHECK(plan.signal.input.name == "q15");
    CHECK(plan.signal.output.name == "q15");
    CHECK(plan.signal.output_per_input == 1.0);
    CHECK(plan.signal.filter.empty());
    CHECK(plan.signal.unit == "g");
    CHECK(plan.signal.full_scale_unit == 6000.0);
    CHECK(plan.signal.quantise == Rounding::half_up);
    REQUIRE(plan.filter.size() == 1);
    CHECK(std::get<Fir>(plan.filter[0].design).taps == std::vector<double>{0.25, 0.5, 0.25});

    REQUIRE(plan.cases.size() == 2);
    const Case& noise = plan.cases[0];
    CHECK(noise.name == "belt noise");
    CHECK(noise.shape == "noise");
    CHECK(noise.stimulus->length_samples() == 4096);
    CHECK(to_text(noise.position) == "plan.toml:18:1");
    REQUIRE(noise.rules.size() == 3);
    const auto& response = std::get<ResponseRule>(noise.rules[0].kind);
    CHECK(to_text(noise.rules[0].position) == "plan.toml:24:1");
    REQUIRE(response.bands.size() == 1);
    CHECK(response.bands[0].from_hz == 10.0);
    CHECK(response.bands[0].to_hz == 100.0);
    CHECK(response.bands[0].min_db == -3.0);
    CHECK(response.bands[0].max_db == 1.0);
    CHECK(std::get<ErrorRule>(noise.rules[1].kind).largest == Limit{1.5, Limit::In::lsb});
    CHECK(to_text(noise.rules[1].position) == "plan.toml:14:1");
    const auto& latency = std::get<LatencyRule>(noise.rules[2].kind);
    CHECK(latency.expected_samples == 0);
    CHECK(latency.implicit);
    CHECK(to_text(noise.rules[2].position) == "plan.toml:18:1");
    CHECK(plan.cases[1].rules.size() == 2);
}

TEST_CASE("plan: a case's own rule takes the place of that for every case, of the same kind only", "[config]") {
    const Plan plan =
        plan_of(good_plan +
                "[[case.rule]]\nkind = \"error\"\nmax_ratio = 0.01\n[[case.rule]]\nkind = \"error\"\nrms_lsb = 2\n");
    const std::vector<Rule>& rules = plan.cases[1].rules;
    REQUIRE(rules.size() == 3);
    CHECK(std::get<ErrorRule>(rules[0].kind).largest == Limit{0.01, Limit::In::full_scale_ratio});
    CHECK(std::get<ErrorRule>(rules[1].kind).rms == Limit{2.0, Limit::In::lsb});
    CHECK(std::get<LatencyRule>(rules[2].kind).implicit);
    CHECK(std::get<ErrorRule>(plan.cases[0].rules[1].kind).largest == Limit{1.5, Limit::In::lsb});
}

TEST_CASE("plan: a latency rule for every case is left to the cases that can tell it", "[config]") {
    const Plan plan = plan_of("title = \"t\"\n" + good_plan.substr(good_plan.find('\n') + 1) +
                              "level_ratio = 0.0\n\n[[rule]]\nkind = \"latency\"\nlatency_samples = 2\n");
    const auto latency_of = [](const Case& the_case) {
        for (const Rule& rule : the_case.rules) {
            if (const auto* latency = std::get_if<LatencyRule>(&rule.kind)) return *latency;
        }
        return LatencyRule{99, false};
    };
    CHECK(latency_of(plan.cases[0]).expected_samples == 2);
    CHECK(!latency_of(plan.cases[0]).implicit);
    CHECK(latency_of(plan.cases[1]).expected_samples == 2);
    CHECK(latency_of(plan.cases[1]).implicit);
}

TEST_CASE("plan: whole numbers are numbers, defaults and every other word of [signal] are taken", "[config]") {
    std::string text = with(good_plan, "rate_hz = 1200.0", "rate_hz = 1200");
    text = with(text, "unit = \"g\"",
                "unit = \"\xC2\xB5g\"\nquantise = \"half-even\"\nfilter = \"load-cell\"\noutput_per_input = 0.5");
    text = with(text, "output = \"q15\"", "output = \"i32\"");
    text = with(text, "max_lsb = 1.5", "max_lsb = 2\nmin_snr_db = -3.5");
    text = with(text, "name = \"tare step\"", "name = \"tare step\"\nstart = \"reset\"");
    const Plan plan = plan_of(text);
    CHECK(plan.signal.rate_hz == 1200.0);
    CHECK(plan.signal.quantise == Rounding::half_even);
    CHECK(plan.signal.filter == "load-cell");
    CHECK(plan.signal.output_per_input == 0.5);
    CHECK(plan.signal.unit == "\xC2\xB5g");
    CHECK(std::get<ErrorRule>(plan.cases[1].rules[0].kind).min_snr_db == -3.5);
}

TEST_CASE("plan: CR LF, tabs, a byte order mark and inline tables change nothing", "[config]") {
    std::string text;
    for (const char c : good_plan) text += c == '\n' ? std::string("\r\n") : std::string(1, c);
    text = "\xEF\xBB\xBF" + with(text, "rate_hz =", "\trate_hz\t=");
    const Plan plan = plan_of(text);
    CHECK(plan.cases.size() == 2);
    CHECK(to_text(plan.cases[1].position) == "plan.toml:28:1");
    const Plan inlined = plan_of(good_plan +
                                 "\n[[case]]\nname = \"inline\"\nrule = [{ kind = \"error\", max_unit = 3 }]\nstimulus "
                                 "= { shape = \"step\", length_samples = 9 }\n");
    CHECK(inlined.cases[2].rules.size() == 2);
    CHECK(to_text(inlined.cases[2].rules[0].position) == "plan.toml:36:9");
}

TEST_CASE("plan: stages of a chain stay in order, coefficients come inline or from a file under the root", "[config]") {
    FakeFiles files;
    files.contents["root/design/taps.txt"] = "# 3 taps\n0.25\n\n +0.5  # middle\n\t2.5e-1\r\n";
    files.contents["root/sos.txt"] = "1\n0\n0\n-0.5\n0.25";
    const std::string stages =
        "[[filter]]\nkind = \"moving-average\"\npoints = 4\n"
        "[[filter]]\nkind = \"fir\"\ntaps_file = \"design/taps.txt\"\ncoefficient_fraction_bits = 15\n"
        "[[filter]]\nkind = \"biquad-cascade\"\nsections_file = \"sos.txt\"\n"
        "[[filter]]\nkind = \"biquad-cascade\"\nsections = [[1, 0, 0, -0.5, 0.25], [0.5, 0, 0, 0, 0]]\n";
    PlanOptions options;
    options.root = "root";
    const Plan plan =
        plan_of(with(good_plan, "[[filter]]\nkind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n", stages), files, options);
    REQUIRE(plan.filter.size() == 4);
    CHECK(std::get<MovingAverage>(plan.filter[0].design).points == 4);
    CHECK(std::get<Fir>(plan.filter[1].design).taps == std::vector<double>{0.25, 0.5, 0.25});
    CHECK(plan.filter[1].coefficient_fraction_bits == 15);
    CHECK(std::get<BiquadCascade>(plan.filter[2].design).sections[0].a1 == -0.5);
    CHECK(std::get<BiquadCascade>(plan.filter[3].design).sections.size() == 2);
}

TEST_CASE("plan: the root is the plan's own folder unless it is given", "[config]") {
    FakeFiles files;
    files.contents["work/plan.toml"] = with(good_plan, "taps = [0.25, 0.5, 0.25]", "taps_file = \"taps.txt\"");
    files.contents["work/taps.txt"] = "1\n";
    const auto read = read_plan("work/plan.toml", files);
    REQUIRE(std::holds_alternative<Plan>(read));
    CHECK(files.read_paths == std::vector<std::string>{"work/plan.toml", "work/taps.txt"});
}

TEST_CASE("plan: --seed takes the place of the seed of every stimulus that has one", "[config]") {
    PlanOptions options;
    options.seed = 99;
    const Plan plan = plan_of(good_plan, {}, options);
    CHECK(std::get<std::int64_t>(plan.cases[0].stimulus_values.all().at("seed")) == 99);
    CHECK(!plan.cases[1].stimulus_values.has("seed"));
    std::vector<double> with_99(16), with_7(16);
    plan.cases[0].stimulus->fill(0, with_99);
    plan_of(good_plan).cases[0].stimulus->fill(0, with_7);
    CHECK(with_99 != with_7);
    const Plan same = plan_of(with(good_plan, "seed = 7", "seed = 99"));
    same.cases[0].stimulus->fill(0, with_7);
    CHECK(with_99 == with_7);
    options.seed = std::uint64_t{1} << 60;
    CHECK(plan_problems(good_plan, {}, options) ==
          "--seed: 1152921504606846976 is above 9007199254740991\n  give a smaller seed\n");
}
