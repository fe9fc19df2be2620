// Stimuli inside stimuli: sequences, sums, and what is refused at which place.
#include <limits>

#include "make.hpp"
#include "stimuli/values_check.hpp"

using namespace halflsb;

namespace {

StimulusWords step(std::int64_t length, std::int64_t codes) {
    return words("step", {{"length_samples", length}, {"level_codes", codes}});
}

ParameterValue one_file(std::vector<double> samples) {
    return std::make_shared<const SignalFile>(SignalFile{"a.csv", {}, {std::move(samples)}, true, {}});
}

/// `depth` sequences in each other, a step in the innermost.
ParameterValue nested(int depth) {
    StimulusWords inner = step(5, 1);
    for (int i = 1; i < depth; ++i) inner = words("sequence", {{"parts", list({inner})}});
    return list({inner});
}

}  // namespace

TEST_CASE("sequence: its parts in order, again and again, from any index", "[stimuli]") {
    const auto sequence =
        made("sequence", {{"parts", list({step(2, 7), words("silence", {{"length_samples", std::int64_t{1}}}),
                                          words("file", {{"file", one_file({-1, -2})}})})},
                          {"repeat", std::int64_t{3}}});
    CHECK(sequence->length_samples() == 15);
    std::vector<Code> expected(4, 0);
    for (int round = 0; round < 3; ++round) {
        for (const Code code : {7, 7, 0, -1, -2}) expected.push_back(code);
    }
    expected.resize(24, 0);
    for (std::int64_t first = -4; first < 20; ++first) {
        for (std::size_t count = 0; count + static_cast<std::size_t>(first + 4) <= 24; ++count) {
            const auto from = expected.begin() + (first + 4);
            REQUIRE(codes_of(*sequence, "q15", first, count) ==
                    std::vector<Code>(from, from + static_cast<std::ptrdiff_t>(count)));
        }
    }
    constexpr auto lowest = std::numeric_limits<std::int64_t>::min();
    constexpr auto highest = std::numeric_limits<std::int64_t>::max();
    CHECK(ratios_of(*sequence, lowest, 3) == std::vector<double>{0, 0, 0});
    CHECK(ratios_of(*sequence, highest - 2, 3) == std::vector<double>{0, 0, 0});
}

TEST_CASE("sequence: a thousand parts are gone through, and one more is refused", "[stimuli]") {
    std::vector<StimulusWords> parts;
    for (std::int64_t i = 1; i <= 1000; ++i) parts.push_back(step(i, i));
    const auto sequence = made("sequence", {{"parts", list(parts)}});
    CHECK(sequence->length_samples() == 500500);
    for (std::int64_t i = 1; i <= 1000; ++i) {
        const std::int64_t begin = i * (i - 1) / 2;
        REQUIRE(codes_of(*sequence, "q15", begin, 1)[0] == i);
        REQUIRE(codes_of(*sequence, "q15", begin + i - 1, 1)[0] == i);
    }
    parts.push_back(step(1, 1));
    CHECK(refusal("sequence", {{"parts", list(parts)}}) ==
          "parts: there are more than 1000 stimuli in all\n"
          "  give at most 1000; repeat says a part many times");
    // Those inside others count too.
    parts.resize(998);
    parts.push_back(words("sequence", {{"parts", list({step(1, 1), step(1, 1)})}}));
    CHECK(refusal("sequence", {{"parts", list(parts)}}) ==
          "parts[999].parts: there are more than 1000 stimuli in all\n"
          "  give at most 1000; repeat says a part many times");
}

TEST_CASE("sequence: nested four deep and no deeper", "[stimuli]") {
    CHECK(refusal("sequence", {{"parts", nested(4)}}) == "accepted");
    CHECK(refusal("sequence", {{"parts", nested(5)}}) ==
          "parts[1].parts[1].parts[1].parts[1].parts: stimuli stand 5 deep in each other\n  nest at most 4 deep");
    // Far deeper, nothing overflows.
    CHECK(refusal("sequence", {{"parts", nested(500)}}) ==
          "parts[1].parts[1].parts[1].parts[1].parts: stimuli stand 5 deep in each other\n  nest at most 4 deep");
    CHECK(refusal("step", {{"length_samples", std::int64_t{9}}, {"add", nested(5)}}) ==
          "add[1].parts[1].parts[1].parts[1].parts: stimuli stand 5 deep in each other\n  nest at most 4 deep");
}

TEST_CASE("sequence: its length is refused beyond the longest stimulus", "[stimuli]") {
    CHECK(refusal("sequence", {{"parts", list({step(10'000'000'000, 1)})}}) == "accepted");
    CHECK(refusal("sequence", {{"parts", list({step(10'000'000'000, 1), step(1, 1)})}}) ==
          "parts: 1 times 10000000001 samples are more than the longest stimulus, 10000000000\n"
          "  make the parts shorter, or repeat them less often");
    CHECK(refusal("sequence", {{"parts", list({step(5, 1)})}, {"repeat", std::int64_t{2'000'000'001}}}) ==
          "repeat: 2000000001 times 5 samples are more than the longest stimulus, 10000000000\n"
          "  make the parts shorter, or repeat them less often");
    CHECK(refusal("sequence", {{"parts", list({step(5, 1)})}, {"repeat", std::int64_t{2'000'000'000}}}) == "accepted");
}

TEST_CASE("sequence: only the continuous bands of its parts count", "[stimuli]") {
    const std::int64_t n = 1000;
    const auto sequence =
        made("sequence",
             {{"parts", list({words("sine", {{"length_samples", n}, {"frequency_hz", 1000.0}}),
                              words("chirp", {{"length_samples", n}, {"from_hz", 12000.0}, {"to_hz", 4800.0}}),
                              words("chirp", {{"length_samples", n}, {"from_hz", 480.0}, {"to_hz", 960.0}}),
                              words("chirp", {{"length_samples", n}, {"from_hz", 9600.0}, {"to_hz", 24000.0}})})}});
    const Spectrum spectrum = sequence->spectrum();
    CHECK(spectrum.tones.empty());
    REQUIRE(spectrum.bands.size() == 2);
    CHECK(spectrum.bands[0].from_cycles_per_sample == 0.01);
    CHECK(spectrum.bands[0].to_cycles_per_sample == 0.02);
    CHECK(spectrum.bands[1].from_cycles_per_sample == 0.1);
    CHECK(spectrum.bands[1].to_cycles_per_sample == 0.5);
}

TEST_CASE("add: sample by sample, an added one takes the length of what it is added to", "[stimuli]") {
    const auto sum = made(
        "step", {{"length_samples", std::int64_t{6}},
                 {"level_codes", std::int64_t{100}},
                 {"add", list({words("impulse", {{"at_samples", std::int64_t{2}}, {"level_codes", std::int64_t{5}}}),
                               words("file", {{"file", one_file({1, 2, 3})}, {"at_samples", std::int64_t{1}}}),
                               words("file", {{"file", one_file(std::vector<double>(50, 1000))},
                                              {"length_samples", std::int64_t{6}}})})}});
    CHECK(sum->length_samples() == 6);
    CHECK(codes_of(*sum, "q15", -1, 8) == std::vector<Code>{0, 1100, 1101, 1107, 1103, 1100, 1100, 0});
    const auto inner =
        made("step",
             {{"length_samples", std::int64_t{4}},
              {"level_codes", std::int64_t{1}},
              {"add", list({words("step", {{"length_samples", std::int64_t{2}},
                                           {"level_codes", std::int64_t{10}},
                                           {"add", list({words("step", {{"level_codes", std::int64_t{100}}})})}})})}});
    CHECK(codes_of(*inner, "q15", 0, 5) == std::vector<Code>{111, 111, 1, 1, 0});
}

TEST_CASE("add: beyond full scale the sum saturates in the quantiser", "[stimuli]") {
    const auto sum = made("step", {{"length_samples", std::int64_t{2}},
                                   {"level_ratio", -0.75},
                                   {"add", list({words("step", {{"level_ratio", -0.75}})})}});
    CHECK(ratios_of(*sum, 0, 1)[0] == -1.5);
    CHECK(codes_of(*sum, "q15", 0, 1)[0] == -32768);
}

TEST_CASE("add: none may be longer, and each is blamed at its own place", "[stimuli]") {
    const auto added = [](StimulusWords inner) {
        return refusal("step", {{"length_samples", std::int64_t{10}}, {"add", list({step(10, 1), std::move(inner)})}});
    };
    CHECK(added(step(10, 1)) == "accepted");
    CHECK(added(step(11, 1)) ==
          "add[2].length_samples: 11 samples are longer than the 10 that they are added to\n  give at most 10");
    CHECK(added(words("sequence", {{"parts", list({step(6, 1), step(5, 1)})}})) ==
          "add[2].parts: 11 samples are longer than the 10 that they are added to\n  give at most 10");
    CHECK(added(words("step", {{"level_ratio", 2.0}})) ==
          "add[2].level_ratio: 2 of full scale is above the largest, 1 of full scale\n  give 1 or less");
    CHECK(added(words("step", {{"level_codes", std::int64_t{40000}}})) ==
          "add[2].level_codes: 40000 is not a code of q15\n  give a whole number from -32768 to 32767");
    CHECK(added(words("setp", {})).find("add[2].shape: no stimulus is called \"setp\"\n  shapes: step, ") == 0);
    CHECK(refusal("step", {{"length_samples", std::int64_t{10}}, {"add", list({})}}) ==
          "add: the list is empty\n  give at least one stimulus");
    CHECK(refusal("step", {{"length_samples", std::int64_t{10}}, {"add", 1.0}}) == "add: needs a list of stimuli");
    CHECK(refusal("sequence", {{"parts", list({step(1, 1), words("step", {})})}}) ==
          "parts[2].length_samples: is missing, and \"step\" needs it\n  give a whole number");
    // Within a sequence in an added one the length is needed again.
    CHECK(added(words("sequence", {{"parts", list({words("step", {})})}})) ==
          "add[2].parts[1].length_samples: is missing, and \"step\" needs it\n  give a whole number");
}

TEST_CASE("add: the spectrum is what the summands have, but for tones that end early or may cancel", "[stimuli]") {
    const auto sine = [](double frequency_hz, std::int64_t length) {
        return words("sine", {{"frequency_hz", frequency_hz}, {"length_samples", length}});
    };
    const auto sum = made("sine", {{"length_samples", std::int64_t{1000}},
                                   {"frequency_hz", 4800.0},
                                   {"add", list({sine(480.0, 1000), sine(9600.0, 999), words("noise", {})})}});
    CHECK(sum->spectrum().tones == std::vector<double>{0.01, 0.1});
    REQUIRE(sum->spectrum().bands.size() == 1);
    CHECK(sum->spectrum().bands[0].to_cycles_per_sample == 0.5);
    const auto twice = made("sine", {{"length_samples", std::int64_t{1000}},
                                     {"frequency_hz", 4800.0},
                                     {"add", list({words("sine", {{"frequency_hz", 4800.0}, {"phase_turns", 0.5}})})}});
    CHECK(twice->spectrum().tones.empty());
    CHECK(codes_of(*twice, "q15", 0, 1000) == std::vector<Code>(1000, 0));
}

TEST_CASE("explicit: a file at any depth", "[stimuli]") {
    CHECK_FALSE(is_explicit("sine", {}));
    CHECK(is_explicit("file", {}));
    const StimulusWords file = words("file", {{"file", one_file({1})}});
    CHECK_FALSE(is_explicit("sequence", values_of({{"parts", list({step(1, 1)})}})));
    CHECK(is_explicit("sequence", values_of({{"parts", list({step(1, 1), file})}})));
    CHECK(is_explicit("step", values_of({{"add", list({words("sequence", {{"parts", list({file})}})})}})));
}
