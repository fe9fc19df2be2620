// What a plan can say of its signal, filters and cases; each refusal whole, at its own key.
#include "runner/config/plan_words.hpp"

#include "oracle/arithmetic/declared.hpp"
#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

void refused(const std::string& from, const std::string& to, int line, const std::string& at,
             const std::string& problem, const std::string& remedy) {
    const std::string text = with(good_plan, from, to);
    CHECK(plan_problems(text) == message(text, line, at, problem, remedy));
}

std::string with_lines(const std::string& after, const std::string& lines) {
    return with(good_plan, after + "\n", after + "\n" + lines);
}

constexpr const char* tare = "name = \"tare step\"";
constexpr const char* fir = "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n";

/// good_plan with a filter that nobody documented: only its baselines are asked for.
std::string unknown_plan() {
    std::string text = with(good_plan, fir, "kind = \"unknown\"\n");
    text = with(text, "kind = \"error\"\nmax_lsb = 1.5\n", "kind = \"unchanged\"\n");
    return with(text,
                "[[case.rule]]\nkind = \"response\"\n"
                "bands = [{ from_hz = 10.0, to_hz = 100.0, min_db = -3, max_db = 1 }]\n",
                "");
}

}  // namespace

TEST_CASE("plan: channels, byte order and units of both sides", "[config]") {
    std::string text = with_lines("output = \"q15\"",
                                  "channels = 16\ninput_byte_order = \"big\"\noutput_byte_order = \"little\"\n"
                                  "input_justification = \"right\"\ninput_unit = \"V\"\ninput_full_scale_unit = 2.5\n");
    const Signal signal = plan_of(text).signal;
    CHECK(signal.channels == 16);
    CHECK(signal.input.byte_order == ByteOrder::big);
    CHECK(signal.output.byte_order == ByteOrder::little);
    CHECK(signal.input_unit == "V");
    CHECK(signal.input_full_scale_unit == 2.5);
    CHECK(signal.unit == "g");
    CHECK(signal.full_scale_unit == 6000.0);
    CHECK(plan_of(good_plan).signal.channels == 1);

    text = with_lines("output = \"q15\"", "channels = 17\n");
    CHECK(plan_problems(text) ==
          message(text, 7, "17", "channels = 17 is above 16", "give a whole number from 1 to 16"));
    text = with_lines("output = \"q15\"", "channels = 0\n");
    CHECK(plan_problems(text) == message(text, 7, "0", "channels = 0 is below 1", "give a whole number from 1 to 16"));
    text = with_lines("output = \"q15\"", "input_full_scale_unit = 0\n");
    CHECK(plan_problems(text) ==
          message(text, 7, "0", "input_full_scale_unit is 0", "give a number other than 0, or leave it out"));
}

TEST_CASE("plan: full_scale_unit serves for the input where it must mean the same", "[config]") {
    CHECK(plan_of(good_plan).signal.input_full_scale_unit == 6000.0);
    CHECK(plan_of(good_plan).signal.input_unit == "g");
    // Another unit, another full scale, another kind of value: nothing is guessed.
    CHECK(!plan_of(with_lines("output = \"q15\"", "input_unit = \"V\"\n")).signal.input_full_scale_unit);
    CHECK(plan_of(with(good_plan, "input = \"q15\"", "input = \"q31\"")).signal.input_full_scale_unit == 6000.0);
    std::string whole = with(good_plan, "input = \"q15\"", "input = \"i16\"");
    whole = with(whole, "output = \"q15\"", "output = \"i32\"");
    CHECK(!plan_of(whole).signal.input_full_scale_unit);
    const std::string mixed = with(good_plan, "output = \"q15\"", "output = \"f32\"\noutput_per_input = 1.0");
    CHECK(!plan_of(with(mixed, "max_lsb = 1.5", "max_ratio = 0.1")).signal.input_full_scale_unit);
}

TEST_CASE("plan: a layout that the format has no room for is told at its key", "[config]") {
    const auto q15 = *sample_format("q15");
    const Error left = with_layout(q15, Justification::left, ByteOrder::little).error();
    const Error packed = with_layout(q15, Justification::packed, ByteOrder::little).error();
    refused("output = \"q15\"", "output = \"q15\"\ninput_justification = \"left\"", 7, "\"left\"",
            "input_justification: " + left.problem, left.remedy);
    refused("output = \"q15\"", "output = \"q15\"\noutput_justification = \"packed\"", 7, "\"packed\"",
            "output_justification: " + packed.problem, packed.remedy);
    refused("output = \"q15\"", "output = \"q15\"\ninput_byte_order = \"pdp\"", 7, "\"pdp\"",
            "input_byte_order = \"pdp\" is not known", "give \"little\" or \"big\"");
}

TEST_CASE("plan: [arithmetic] is the default of every stage, [filter.arithmetic] goes over it", "[config]") {
    const std::string text =
        with(good_plan, std::string("[[filter]]\n") + fir,
             "[arithmetic]\ncoefficient_fraction_bits = 15\naccumulator_bits = 32\n"
             "[[filter]]\n" +
                 std::string(fir) + "[[filter]]\n" + fir + "[filter.arithmetic]\ncoefficient_fraction_bits = 10\n");
    const Plan plan = plan_of(text);
    REQUIRE(plan.filter.size() == 2);
    CHECK(plan.filter[0].arithmetic.coefficient_fraction_bits == 15);
    CHECK(plan.filter[0].arithmetic.accumulator_bits == 32);
    CHECK(plan.filter[1].arithmetic.coefficient_fraction_bits == 10);
    CHECK(plan.filter[1].arithmetic.accumulator_bits == 32);
}

TEST_CASE("plan: a chain has at most 32 stages", "[config]") {
    const auto plan_with = [](int more) {
        std::string stages;
        for (int i = 0; i < more; ++i) stages += "[[filter]]\nkind = \"moving-average\"\npoints = 2\n";
        return with(good_plan, fir, fir + stages);
    };
    CHECK(plan_problems(plan_with(31)).empty());
    CHECK(plan_problems(plan_with(32)) == message(plan_with(32), 106, "[[filter]]",
                                                  "the chain has 33 stages, the most are 32",
                                                  "put coefficients of one kind into one stage"));
}

TEST_CASE("plan: an unknown filter has no stated arithmetic", "[config]") {
    const std::string text =
        with(unknown_plan(), "kind = \"unknown\"\n", "kind = \"unknown\"\n[filter.arithmetic]\nrounding = \"floor\"\n");
    CHECK(plan_problems(text) == message(text, 12, "arithmetic]", "the arithmetic of an unknown filter is stated",
                                         "leave it out, or say what the filter is"));
}

TEST_CASE("plan: words between stages count in the signal's kind of value", "[config]") {
    const auto plan_with = [](const std::string& word) {
        return with(good_plan, fir, std::string(fir) + "[filter.arithmetic]\nstage_format = \"" + word + "\"\n");
    };
    CHECK(plan_problems(plan_with("q31")).empty());
    CHECK(plan_problems(plan_with("f32")).empty());
    CHECK(
        plan_problems(plan_with("i32")) ==
        message(plan_with("i32"), 14, "\"i32\"",
                "stage_format: i32 counts in LSB, the signal's q15 in fractions of full scale, so the stage would clip "
                "or lose its samples",
                "give a format of the q family"));
}

TEST_CASE("plan: words of the arithmetic are as strict as any", "[config]") {
    std::string text = with(good_plan, fir, std::string(fir) + "[filter.arithmetic]\naccumulator_bits = 7\n");
    CHECK(plan_problems(text) ==
          message(text, 14, "7", "accumulator_bits = 7 is below 8", "give a whole number from 8 to 64 bits"));
    text = with(good_plan, "[[filter]]", "[arithmetic]\nacumulator_bits = 32\n[[filter]]");
    CHECK(plan_problems(text) == message(text, 11, "acumulator", "unknown key \"acumulator_bits\" in [arithmetic]",
                                         "did you mean accumulator_bits?"));
    text = with(good_plan, fir, std::string(fir) + "[filter.arithmetic]\ntaps_file = \"t\"\n");
    CHECK(plan_problems(text) == message(text, 14, "taps_file",
                                         "\"taps_file\" belongs to [[filter]], here it stands in [filter.arithmetic]",
                                         "move the line up, to the other keys of [[filter]]"));
    text = with(good_plan, fir, std::string(fir) + "arithmetic = 3\n");
    CHECK(plan_problems(text) == message(text, 13, "3", "arithmetic is a whole number, wanted one table",
                                         "write it under the header [filter.arithmetic]"));
}

TEST_CASE("plan: a case has labels", "[config]") {
    const std::string forty(40, 'x');
    CHECK(plan_of(with_lines(tare, "labels = [\"quick\", \"A-1_b\", \"" + forty + "\"]\n")).cases[1].labels ==
          std::vector<std::string>{"quick", "A-1_b", forty});
    CHECK(plan_of(good_plan).cases[1].labels.empty());
    const auto refusal = [](const std::string& value, const std::string& at, const std::string& problem,
                            const std::string& remedy) {
        const std::string text = with_lines(tare, "labels = " + value + "\n");
        CHECK(plan_problems(text) == message(text, 30, at, problem, remedy));
    };
    refusal("\"quick\"", "\"quick\"", "labels is a string, wanted a list of strings", "write labels = [\"quick\"]");
    refusal("[]", "[]", "labels is empty", "give a label, or leave it out");
    refusal("[1]", "1", "in labels stands a whole number, wanted strings", "write labels = [\"quick\"]");
    refusal("[\"a b\"]", "\"a b\"", "\"a b\" is no label", "use letters, digits, - and _, at most 40");
    refusal("[\"\"]", "\"\"", "\"\" is no label", "use letters, digits, - and _, at most 40");
    refusal("[\"x" + forty + "\"]", "\"x", "\"x" + forty + "\" is no label",
            "use letters, digits, - and _, at most 40");
    refusal("[\"a\", \"b\", \"a\"]", "\"a\"]", "the label \"a\" is there twice", "keep one of the two");
}

TEST_CASE("plan: settings of the firmware, under a header or in braces", "[config]") {
    const std::string inlined = with_lines(tare, "settings = { gain = 3, \"average-points\" = -2147483648 }\n");
    const Case read = plan_of(inlined).cases[1];
    REQUIRE(read.settings.size() == 2);
    CHECK(read.settings[0].name == "gain");
    CHECK(read.settings[0].value == 3);
    CHECK(to_text(read.settings[0].position) == "plan.toml:30:21");
    CHECK(read.settings[1].name == "average-points");
    CHECK(read.settings[1].value == INT32_MIN);
    CHECK(plan_of(with_lines(tare, "[case.settings]\nrate = 2147483647\n")).cases[1].settings[0].value == INT32_MAX);

    const auto refusal = [](const std::string& settings, const std::string& at, const std::string& problem,
                            const std::string& remedy) {
        const std::string text = with_lines(tare, "settings = " + settings + "\n");
        CHECK(plan_problems(text) == message(text, 30, at, problem, remedy));
    };
    const std::string long_name(25, 'n');
    refusal("{ gain = 2147483648 }", "2147483648",
            "the setting \"gain\" = 2147483648 does not fit the 32 bits of a setting",
            "give a number from -2147483648 to 2147483647");
    refusal("{ gain = -2147483649 }", "-2147483649",
            "the setting \"gain\" = -2147483649 does not fit the 32 bits of a setting",
            "give a number from -2147483648 to 2147483647");
    refusal("{ gain = 1.5 }", "1.5", "the setting \"gain\" is a number, wanted a whole number",
            "write gain = 1; the board's greeting says which settings there are");
    refusal("{ " + long_name + " = 1 }", long_name,
            "the setting \"" + long_name + "\" is no name that a board can have",
            "give 1 to 24 characters that can be seen");
    refusal("{}", "{}", "settings is empty", "give a setting, or leave it out");
    refusal("7", "7", "settings is a whole number, wanted one table", "write it under the header [case.settings]");
}

TEST_CASE("plan: a case that starts running discards samples, any other counts them all", "[config]") {
    const Case running = plan_of(with_lines(tare, "start = \"running\"\ndiscard_samples = 255\n")).cases[1];
    CHECK(running.start == Start::running);
    CHECK(running.start_samples == 255);
    refused(tare, std::string(tare) + "\nstart = \"running\"\ndiscard_samples = 256", 31, "256",
            "discard_samples = 256 leaves nothing of 256 samples", "discard fewer, or lengthen the stimulus");
    refused(tare, std::string(tare) + "\nstart = \"running\"", 30, "\"running\"",
            "start = \"running\" without discard_samples",
            "say how many leading samples no rule looks at, because of what went before: discard_samples = 256");
    for (const std::string start : {"reset", "flush"}) {
        refused(tare, std::string(tare) + "\nstart = \"" + start + "\"\ndiscard_samples = 8", 31, "8",
                "discard_samples with start = \"" + start + "\", where every sample counts",
                "leave it out, or write start = \"running\"");
    }
    refused(tare, std::string(tare) + "\ndiscard_samples = 8", 30, "8",
            "discard_samples with start = \"reset\", where every sample counts",
            "leave it out, or write start = \"running\"");
    refused(tare, std::string(tare) + "\nstart = \"running\"\ndiscard_samples = 0", 31, "0",
            "discard_samples = 0 is below 1", "give a whole number from 1 to 10000000000 samples");
}

TEST_CASE("plan: a flush is as long as the filter remembers", "[config]") {
    const auto flush = [](const std::string& text) { return plan_of(text).cases[1]; };
    const std::string text = with_lines(tare, "start = \"flush\"\n");
    // Three taps remember two samples.
    CHECK(flush(text).start == Start::flush);
    CHECK(flush(text).start_samples == 2);
    // A pole at 0.5 forgets a bit a sample, so 16 bits more cost 16 samples more.
    const std::string recursive = "kind = \"biquad-cascade\"\nsections = [[0.5, 0, 0, -0.5, 0]]\n";
    const std::int64_t q15_samples = flush(with(text, fir, recursive)).start_samples;
    const std::int64_t expected = *flush_samples(plan_of(with(text, fir, recursive)).filter, 1.0, std::ldexp(1.0, -16));
    CHECK(q15_samples == expected);
    const std::string q31 = with(with(text, fir, recursive), "output = \"q15\"", "output = \"q31\"");
    CHECK(flush(q31).start_samples == q15_samples + 16);
}

TEST_CASE("plan: a filter that never forgets cannot be flushed", "[config]") {
    const std::string slow = "kind = \"biquad-cascade\"\nsections = [[1e-9, 0, 0, -0.999999999, 0]]\n";
    const std::string text = with(with_lines(tare, "start = \"flush\"\n"), fir, slow);
    CHECK(plan_problems(text) ==
          message(text, 30, "\"flush\"",
                  "start = \"flush\" would never end: this filter forgets too slowly, or not at all",
                  "write start = \"reset\", or \"running\" with discard_samples"));
}

TEST_CASE("plan: a case may have a rate of its own", "[config]") {
    const std::string sine = "shape = \"sine\"\nfrequency_hz = 299.5\n";
    const std::string text = with(with_lines(tare, "rate_hz = 600\n"), "shape = \"step\"\n", sine);
    const Plan plan = plan_of(text);
    CHECK(plan.cases[1].rate_hz == 600.0);
    CHECK(rate_hz_of(plan, plan.cases[1]) == 600.0);
    CHECK(rate_hz_of(plan, plan.cases[0]) == 1200.0);
    CHECK(plan.cases[1].stimulus->spectrum().tones == std::vector<double>{299.5 / 600.0});
    // Taps are the same at every rate.
    CHECK(!plan.cases[1].filter);

    const std::string beyond = with(text, "frequency_hz = 299.5", "frequency_hz = 300.5");
    CHECK(plan_problems(beyond).find("plan.toml:33:16: ") == 0);
    // Bands of its own rule are held to its rate, and those of the rules for every case too.
    const std::string bands = "bands = [{ from_hz = 10.0, to_hz = 301.0, min_db = -3 }]";
    const std::string own = text + "[[case.rule]]\nkind = \"response\"\n" + bands + "\n";
    CHECK(plan_problems(own) == message(own, 37, "301", "the band 10 to 301 Hz ends above Nyquist, 300 Hz",
                                        "end it at 300 Hz or below, or correct rate_hz"));
    const std::string common = text + "[[rule]]\nkind = \"response\"\n" + bands + "\n";
    CHECK(plan_problems(common) == message(common, 35, "[[rule]]",
                                           "the band 10 to 301 Hz ends above Nyquist of case \"tare step\", 300 Hz",
                                           "give that case a response rule of its own"));
}

TEST_CASE("plan: one channel is driven, or all of them", "[config]") {
    const std::string two = with_lines("output = \"q15\"", "channels = 2\n");
    const Plan plan = plan_of(with(two, "length_samples = 256", "length_samples = 256\nchannel = 2"));
    CHECK(plan.cases[1].channel == 2);
    CHECK(!plan.cases[0].channel);
    CHECK(!is_driven(plan.cases[1], 1));
    CHECK(is_driven(plan.cases[1], 2));
    CHECK(!plan.cases[1].stimulus_values.has("channel"));
    const std::string third = with(two, "length_samples = 256", "length_samples = 256\nchannel = 3");
    CHECK(plan_problems(third) == message(third, 34, "3", "channel = 3, but [signal] has 2 channels",
                                          "give 1 to 2, or leave it out: then every channel is driven"));
    refused("length_samples = 256", "length_samples = 256\nchannel = 2", 33, "2",
            "channel = 2, but [signal] has 1 channel", "leave it out, or say channels in [signal]");
}

TEST_CASE("plan: an unknown filter is held to its baseline alone", "[config]") {
    const Plan plan = plan_of(unknown_plan());
    CHECK(plan.filter_is_unknown);
    CHECK(plan.filter.empty());
    for (const Case& the_case : plan.cases) {
        REQUIRE(the_case.rules.size() == 1);
        CHECK(std::holds_alternative<UnchangedRule>(the_case.rules[0].kind));
    }
    CHECK(!plan_of(good_plan).filter_is_unknown);
}

TEST_CASE("plan: rules that need a reference are refused for an unknown filter", "[config]") {
    const std::string remedy =
        "rules of kind \"unchanged\", \"repeat\", \"blocks\", \"shift\", \"linearity\" or \"deadline\" hold without one; or say in "
        "[[filter]] what the firmware computes";
    for (const std::string rule : {"error\"\nmax_lsb = 1", "latency\"\nlatency_samples = 0",
                                   "response\"\nbands = [{ from_hz = 1, to_hz = 9, max_db = 1 }]"}) {
        const std::string kind = rule.substr(0, rule.find('"'));
        const std::string text = unknown_plan() + "[[case.rule]]\nkind = \"" + rule + "\n";
        const int line = static_cast<int>(std::count(text.begin(), text.end(), '\n')) - 1;
        CHECK(plan_problems(text) ==
              message(text, line, "\"" + kind + "\"",
                      "a rule of kind \"" + kind + "\" needs a reference, and the filter is unknown", remedy));
    }
}

TEST_CASE("plan: what else an unknown filter cannot have", "[config]") {
    std::string text = with(unknown_plan(), "kind = \"unknown\"\n",
                            "kind = \"unknown\"\n[[filter]]\nkind = \"moving-average\"\npoints = 4\n");
    CHECK(plan_problems(text) ==
          message(text, 11, "\"unknown\"", "an unknown filter beside other stages",
                  "make it the only [[filter]]: of a chain with an unknown stage nothing is known"));
    text = with(unknown_plan(), tare, std::string(tare) + "\nstart = \"flush\"");
    CHECK(plan_problems(text) ==
          message(text, 25, "\"flush\"",
                  "start = \"flush\" needs the length of the filter's memory, and the filter is unknown",
                  "write start = \"reset\", or \"running\" with discard_samples"));
    text = with(unknown_plan(), "[[rule]]\nkind = \"unchanged\"\n", "") + "[[case.rule]]\nkind = \"unchanged\"\n";
    CHECK(plan_problems(text) ==
          message(text, 14, "[[case]]", "no rule looks at case \"belt noise\"",
                  "of an unknown filter nothing is judged without asking: add a rule of kind \"repeat\" or "
                  "\"unchanged\""));
}
