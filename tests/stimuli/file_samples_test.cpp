#include <cmath>

#include "make.hpp"

using namespace halflsb;

namespace {

using Columns = std::vector<std::vector<double>>;

ParameterValue file(Columns columns, bool whole_numbers = true, std::vector<std::string> names = {},
                    std::optional<double> rate_hz = {}) {
    return std::make_shared<const SignalFile>(
        SignalFile{"data/belt.csv", std::move(names), std::move(columns), whole_numbers, rate_hz});
}

const double not_a_number = std::nan("");

}  // namespace

TEST_CASE("file: codes arrive as exactly those codes, in every format", "[stimuli]") {
    for (const SampleFormat& format : sample_formats()) {
        if (!format.has_lsb()) continue;
        const double zero = zero_code(format), end = std::ldexp(1.0, format.word_bits - 1);
        const std::vector<double> codes = {zero - end, zero - end + 1, zero - 1, zero, zero + 1, zero + end - 1};
        const std::string name(format.name);
        const auto stimulus = made("file", {{"file", file({codes})}}, 1200.0, name);
        CHECK(stimulus->length_samples() == 6);
        for (const auto rounding : rounding_names()) {
            const auto sent = codes_of(*stimulus, name, 0, 6, *rounding_from(rounding));
            for (std::size_t i = 0; i < codes.size(); ++i) CHECK(static_cast<double>(sent[i]) == codes[i]);
        }
        CHECK(codes_of(*stimulus, name, 6, 1)[0] == zero_code(format));
        INFO(name);
        CHECK(refusal("file", {{"file", file({{zero + end}})}}, 1200.0, name).find("which is no code of " + name) !=
              std::string::npos);
        CHECK(refusal("file", {{"file", file({{zero - end - 1}})}}, 1200.0, name).find("which is no code of " + name) !=
              std::string::npos);
    }
}

TEST_CASE("file: fractions are ratios, the unit is said", "[stimuli]") {
    CHECK(codes_of(*made("file", {{"file", file({{0.5, -1.0, 1.0}}, false)}}), "q15", 0, 3) ==
          std::vector<Code>{16384, -32768, 32767});
    // Whole numbers of f32 have no codes to be: they are ratios.
    CHECK(ratios_of(*made("file", {{"file", file({{1, -1}})}}, 1200.0, "f32"), 0, 2) == std::vector<double>{1, -1});
    CHECK(ratios_of(*made("file", {{"file", file({{1, 0}})}, {"holds", std::string("ratio")}}), 0, 2) ==
          std::vector<double>{1, 0});
    CHECK(ratios_of(
              *made("file", {{"file", file({{3000, -6000}})}, {"holds", std::string("unit")}}, 1200.0, "q15", 6000.0),
              0, 2) == std::vector<double>{0.5, -1.0});
}

TEST_CASE("file: it starts at at_samples, is cut at length_samples and repeats", "[stimuli]") {
    const auto placed =
        made("file", {{"file", file({{1, 2, 3}})}, {"at_samples", std::int64_t{2}}, {"repeat", std::int64_t{2}}});
    CHECK(placed->length_samples() == 8);
    CHECK(codes_of(*placed, "q15", -1, 10) == std::vector<Code>{0, 0, 0, 1, 2, 3, 1, 2, 3, 0});
    CHECK(codes_of(*placed, "q15", 6, 3) == std::vector<Code>{2, 3, 0});
    const auto cut = made("file", {{"file", file({{1, 2, 3}})}, {"length_samples", std::int64_t{2}}});
    CHECK(codes_of(*cut, "q15", 0, 4) == std::vector<Code>{1, 2, 0, 0});
    CHECK(placed->spectrum().bands.empty());
    CHECK(placed->spectrum().tones.empty());
}

TEST_CASE("file: added to a shorter stimulus, it is not cut without a word", "[stimuli]") {
    const ParameterValue three = file({{1, 2, 3}});
    const auto added = [&](Given given) {
        return refusal("step", {{"length_samples", std::int64_t{2}}, {"add", list({words("file", given)})}});
    };
    CHECK(added({{"file", three}}) ==
          "add[1].file: its 3 samples are more than the 2 of the stimulus that it is added to\n  say how much of it is "
          "meant: length_samples = 2");
    CHECK(added({{"file", three}, {"length_samples", std::int64_t{2}}}) == "accepted");
    CHECK(refusal("step", {{"length_samples", std::int64_t{3}}, {"add", list({words("file", {{"file", three}})})}}) ==
          "accepted");
}

TEST_CASE("file: a column by its name, or by its number", "[stimuli]") {
    const auto two = file({{1, 1}, {2, 2}}, true, {"gross", "2"});
    const auto chosen = [&](const char* column) {
        return codes_of(*made("file", {{"file", two}, {"column", std::string(column)}}), "q15", 0, 1)[0];
    };
    CHECK(chosen("gross") == 1);
    CHECK(chosen("1") == 1);
    CHECK(chosen("2") == 2);
    CHECK(refusal("file", {{"file", two}}) ==
          "column: \"data/belt.csv\" has 2 columns\n  give column = one of: gross, 2, or its number from 1, in quotes");
    for (const auto wrong : {"0", "3", "net", "1x", ""}) {
        CHECK(refusal("file", {{"file", two}, {"column", std::string(wrong)}}) ==
              "column: \"data/belt.csv\" has no column \"" + std::string(wrong) +
                  "\"\n  give column = one of: gross, 2, or its number from 1, in quotes");
    }
    // A heading that is a number counts as a name first.
    const auto swapped = file({{1}, {2}}, true, {"2", "1"});
    CHECK(codes_of(*made("file", {{"file", swapped}, {"column", std::string("1")}}), "q15", 0, 1)[0] == 2);
    CHECK(refusal("file", {{"file", file({})}}) ==
          "file: \"data/belt.csv\" holds no samples\n  name a file with at least one");
    CHECK(refusal("file", {{"file", file({{}})}}) ==
          "file: \"data/belt.csv\" holds no samples\n  name a file with at least one");
}

TEST_CASE("file: samples that cannot be sent are refused by their index", "[stimuli]") {
    const auto problem = [](std::vector<double> samples, const char* holds, const char* format = "q15",
                            bool whole_numbers = true) {
        return refusal("file", {{"file", file({std::move(samples)}, whole_numbers)}, {"holds", std::string(holds)}},
                       1200.0, format, 6000.0);
    };
    CHECK(problem({0, 1, not_a_number}, "codes") ==
          "file: sample 2 of \"data/belt.csv\", counted from 0, is nan\n  only finite numbers can be sent");
    CHECK(problem({0, INFINITY}, "unit") ==
          "file: sample 1 of \"data/belt.csv\", counted from 0, is inf\n  only finite numbers can be sent");
    CHECK(problem({0, 0.5}, "codes") ==
          "file: sample 1 of \"data/belt.csv\", counted from 0, is 0.5, and a code is a whole number\n"
          "  say what the file holds: holds = \"ratio\" or \"unit\"");
    CHECK(problem({0, 4096}, "auto", "u12") ==
          "file: sample 1 of \"data/belt.csv\", counted from 0, is 4096, which is no code of u12\n"
          "  its codes are 0 to 4095");
    CHECK(problem({-1}, "auto", "u12") ==
          "file: sample 0 of \"data/belt.csv\", counted from 0, is -1, which is no code of u12\n"
          "  its codes are 0 to 4095");
    CHECK(problem({1.0000000000000002}, "auto", "q15", false) ==
          "file: sample 0 of \"data/belt.csv\", counted from 0, is 1.0000000000000002, beyond full scale, 1\n"
          "  say what the file holds, or scale it");
    CHECK(problem({6000, -6000}, "unit") == "accepted");
    CHECK(problem({-6001}, "unit") ==
          "file: sample 0 of \"data/belt.csv\", counted from 0, is -6001, beyond full scale, 6000\n"
          "  say what the file holds, or scale it");
    CHECK(problem({1}, "codes", "f32") ==
          "holds: format f32 has no codes that count\n  let the file hold ratios of full scale, holds = \"ratio\"");
    CHECK(refusal("file", {{"file", file({{1}})}, {"holds", std::string("unit")}}) ==
          "holds: nothing says what full scale of the input means in a unit\n"
          "  say so in [signal], or let the file hold ratios of full scale");
}

TEST_CASE("file: another rate or more samples than it has are refused", "[stimuli]") {
    const auto three = file({{1, 2, 3}});
    CHECK(refusal("file", {{"file", three}, {"recorded_rate_hz", 1200.0}}, 1200.0) == "accepted");
    CHECK(refusal("file", {{"file", three}, {"recorded_rate_hz", 1000.0}}, 1200.0) ==
          "recorded_rate_hz: it was recorded at 1000 Hz, the signal has 1200 Hz\n"
          "  resample the file, or correct the rate");
    CHECK(refusal("file", {{"file", file({{1}}, true, {}, 1200.0)}}, 1200.0) == "accepted");
    CHECK(refusal("file", {{"file", file({{1}}, true, {}, 48000.0)}}, 1200.0) ==
          "file: \"data/belt.csv\" says that it was recorded at 48000 Hz, the signal has 1200 Hz\n"
          "  resample the file, or correct the rate");
    CHECK(refusal("file", {{"file", three}, {"length_samples", std::int64_t{3}}}) == "accepted");
    CHECK(refusal("file", {{"file", three}, {"length_samples", std::int64_t{4}}}) ==
          "length_samples: 4 samples are more than the file gives, 3\n  give at most 3, or a larger repeat");
    CHECK(refusal("file", {{"file", three}, {"length_samples", std::int64_t{4}}, {"repeat", std::int64_t{2}}}) ==
          "accepted");
    CHECK(refusal("file", {{"file", three}, {"repeat", std::int64_t{10'000'000'000}}}) ==
          "repeat: 10000000000 times 3 samples, from 0 on, are more than the longest stimulus, 10000000000\n"
          "  repeat it less often");
    CHECK(refusal("file", {{"file", std::shared_ptr<const SignalFile>()}}) == "file: needs the samples of a file");
}
