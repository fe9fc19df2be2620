// What a maker refuses is told at the very key, however deep it stands; what it takes arrives as it was written.
#include "tests/support/config_texts.hpp"

using namespace halflsb;

namespace {

std::string shown(const Error& error) {
    const std::string word = error.place.substr(error.place.rfind('.') + 1);
    return (error.problem.find(word) == std::string::npos ? error.place + ": " : "") + error.problem;
}

std::string message(const std::string& text, int line, const std::string& at, const Error& error) {
    return halflsb::message(text, line, at, shown(error), error.remedy);
}

const std::string step = "shape = \"step\"\nlength_samples = 256\n";  // lines 31 and 32 of good_plan

std::string with_stimulus(const std::string& lines) { return with(good_plan, step, lines); }

std::vector<Code> codes_of(const Plan& plan, std::size_t count) {
    std::vector<Code> codes(count);
    fill_case_codes(plan, plan.cases[1], 0, codes);
    return codes;
}

Error sine_error(double frequency_hz) {
    ParameterValues values;
    values.set("frequency_hz", frequency_hz);
    values.set("length_samples", std::int64_t{8});
    return make_stimulus("sine", values, {1200.0, *sample_format("q15")}).error();
}

constexpr const char* fir = "kind = \"fir\"\ntaps = [0.25, 0.5, 0.25]\n";

}  // namespace

TEST_CASE("plan: a sequence is its parts one after the other", "[config]") {
    const Plan plan = plan_of(with_stimulus(
        "shape = \"sequence\"\n[[case.stimulus.parts]]\nshape = \"step\"\nlevel_ratio = 0.25\nlength_samples = 2\n"
        "[[case.stimulus.parts]]\nshape = \"step\"\nlevel_ratio = -0.5\nlength_samples = 1\n"));
    CHECK(codes_of(plan, 4) == std::vector<Code>{8192, 8192, -16384, 0});
    CHECK(plan.cases[1].stimulus->length_samples() == 3);
    CHECK(plan.cases[1].stimulus_values.stimuli("parts").size() == 2);
}

TEST_CASE("plan: what is added takes the length of what it is added to", "[config]") {
    const Plan plan = plan_of(with_stimulus(
        "shape = \"step\"\nlength_samples = 3\nlevel_ratio = 0.25\nadd = [{ shape = \"step\", level_ratio = 0.5, "
        "at_samples = 1 }]\n"));
    CHECK(codes_of(plan, 4) == std::vector<Code>{8192, 24576, 24576, 0});
}

TEST_CASE("plan: what a part or an addition lacks is told at its own key", "[config]") {
    Error error = sine_error(700.0);
    REQUIRE(error.place == "frequency_hz");
    std::string text = with_stimulus(
        "shape = \"sequence\"\nparts = [{ shape = \"step\", length_samples = 8 }, { shape = \"sine\", frequency_hz = "
        "700, length_samples = 8 }]\n");
    error.place = "parts[2].frequency_hz";
    CHECK(plan_problems(text) == message(text, 32, "700", error));
    text = with_stimulus(
        "shape = \"step\"\nlength_samples = 8\n[[case.stimulus.add]]\nshape = \"sine\"\nfrequency_hz = 700\n");
    error.place = "add[1].frequency_hz";
    CHECK(plan_problems(text) == message(text, 35, "700", error));
}

TEST_CASE("plan: --seed reaches the noise inside a stimulus", "[config]") {
    const std::string text = with_stimulus(
        "shape = \"step\"\nlength_samples = 64\nadd = [{ shape = \"noise\", seed = 5, level_ratio = 0.25 }]\n");
    const auto seeded = [&](std::uint64_t seed) {
        PlanOptions options;
        options.seed = seed;
        return codes_of(plan_of(text, {}, options), 64);
    };
    CHECK(seeded(5) == codes_of(plan_of(text), 64));
    CHECK(seeded(6) != seeded(5));
}

TEST_CASE("plan: a stimulus file is sent as it stands, at the rate of its case only", "[config]") {
    FakeFiles files;
    files.contents["./w.csv"] = "time_s,raw\n0.000000,-32768\n0.000833,0\n0.001667,32767\n";
    const std::string text = with_stimulus("shape = \"file\"\nfile = \"w.csv\"\n");
    const Plan plan = plan_of(text, files);
    CHECK(codes_of(plan, 4) == std::vector<Code>{-32768, 0, 32767, 0});
    REQUIRE(plan.parts.size() == 2);
    CHECK(plan.parts[1].path == "w.csv");
    const std::string slower =
        plan_problems(with(text, "name = \"tare step\"", "name = \"tare step\"\nrate_hz = 600"), files);
    CHECK(slower.find("plan.toml:33:8: ") == 0);
    CHECK(slower.find("600 Hz") != std::string::npos);
}

TEST_CASE("plan: the number of a column is the one in the file, the times counted", "[config]") {
    FakeFiles files;
    files.contents["./w.csv"] = "gross,time_s,net\n1,0.000000,4\n2,0.000833,5\n3,0.001667,6\n";
    const auto column = [](const std::string& number) {
        return with_stimulus("shape = \"file\"\nfile = \"w.csv\"\ncolumn = \"" + number + "\"\n");
    };
    CHECK(codes_of(plan_of(column("1"), files), 3) == std::vector<Code>{1, 2, 3});
    CHECK(codes_of(plan_of(column("3"), files), 3) == std::vector<Code>{4, 5, 6});
    const auto refused = [&](const std::string& number, const std::string& problem) {
        CHECK(plan_problems(column(number), files) ==
              "plan.toml:33:10: " + problem + "\n    column = \"" + number + "\"\n             ^\n  " +
                  "give column = one of: gross, net, or its number from 1, in quotes\n");
    };
    refused("2", "column \"2\" of \"w.csv\" holds the times");
    refused("4", "\"w.csv\" has no column \"4\"");
}

TEST_CASE("plan: a stage is refused at the word of the arithmetic that is to blame", "[config]") {
    // Poles at 0.99 do not survive two fraction bits.
    const std::string sharp = "kind = \"biquad-cascade\"\nsections = [[1, 0, 0, -1.98, 0.9801]]\n";
    ParameterValues values;
    values.set("sections", std::vector<std::vector<double>>{{1.0, 0.0, 0.0, -1.98, 0.9801}});
    StageContext context{1200.0, {}, 1};
    context.arithmetic.coefficient_fraction_bits = 2;
    const Error error = make_stage("biquad-cascade", values, context).error();
    REQUIRE(error.place == "coefficient_fraction_bits");
    const std::string own = with(good_plan, fir, sharp + "[filter.arithmetic]\ncoefficient_fraction_bits = 2\n");
    CHECK(plan_problems(own) == message(own, 14, "2", error));
    const std::string common =
        with(with(good_plan, fir, sharp), "[[filter]]", "[arithmetic]\ncoefficient_fraction_bits = 2\n[[filter]]");
    CHECK(plan_problems(common) == message(common, 11, "2", error));
    const std::string word = with(good_plan, fir, sharp + "coefficient_fraction_bits = 2\n");
    CHECK(plan_problems(word) == message(word, 13, "2", error));
}

TEST_CASE("plan: stages of one channel, and a filter made anew at the rate of a case", "[config]") {
    std::string text = with(good_plan, "output = \"q15\"\n", "output = \"q15\"\nchannels = 2\n");
    text = with(text, fir, std::string(fir) + "[[filter]]\nkind = \"one-pole\"\ncorner_hz = 30.0\nchannels = [2]\n");
    text = with(text, "name = \"tare step\"", "name = \"tare step\"\nrate_hz = 600\nstart = \"flush\"");
    const Plan plan = plan_of(text);
    CHECK(chain_of(plan, plan.cases[0], 1).size() == 1);
    CHECK(chain_of(plan, plan.cases[0], 2).size() == 2);
    REQUIRE(plan.cases[1].filter);
    CHECK(plan.cases[1].filter->at(1).kind == "one-pole");
    // The same corner is twice as far up at half the rate, and forgets in half the samples.
    CHECK(std::abs(response_at({plan.cases[1].filter->at(1)}, 30.0 / 600.0)) ==
          Approx(std::abs(response_at({plan.filter[1]}, 30.0 / 1200.0))).epsilon(0.05));
    CHECK(plan.cases[1].start_samples == *flush_samples(chain_of(plan, plan.cases[1], 2), 1.0, std::ldexp(1.0, -16)));
    const std::string beyond = with(text, "corner_hz = 30.0", "corner_hz = 400.0");
    CHECK(plan_problems(beyond).find(": at 600 Hz the filter has no design: ") != std::string::npos);
    CHECK(plan_problems(beyond).find("rate_hz = 600") != std::string::npos);
}

TEST_CASE("plan: offset binary and whole numbers are of one kind, a packed word has its layout", "[config]") {
    std::string text = with(good_plan, "input = \"q15\"", "input = \"u12\"\ninput_justification = \"left\"");
    text = with(text, "output = \"q15\"", "output = \"i24\"\noutput_justification = \"packed\"");
    const Plan plan = plan_of(text);
    CHECK(plan.signal.output_per_input == 1.0);
    CHECK(plan.signal.input.justification == Justification::left);
    CHECK(plan.signal.output.word_bytes() == 3);
    CHECK(!plan.signal.input_full_scale_unit);
    const std::string mixed = with(good_plan, "input = \"q15\"", "input = \"u16\"");
    CHECK(plan_problems(mixed).find("u16 in and q15 out are of different kinds, so nothing says what gain 1 is") !=
          std::string::npos);
}
