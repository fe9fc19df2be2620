// Every refusal of make_stimulus with its whole text, and the accepted neighbour of each limit.
#include <cmath>
#include <limits>

#include "make.hpp"
#include "stimuli/number_text.hpp"
#include "stimuli/values_check.hpp"

using namespace halflsb;

namespace {

const std::int64_t ten = 10;

}  // namespace

TEST_CASE("refusal: a shape nobody knows", "[stimuli]") {
    CHECK(refusal("stpe", {}) ==
          "shape: no stimulus is called \"stpe\"\n  shapes: step, impulse, silence, ramp, square, signs, chirp, noise, "
          "prbs, "
          "sine, multitone, burst, file, sequence");
}

TEST_CASE("refusal: names and types that do not fit the table", "[stimuli]") {
    CHECK(refusal("step", {{"length_samples", ten}, {"lenght", ten}}) ==
          "lenght: \"step\" has no such parameter\n"
          "  parameters: length_samples, at_samples, level_ratio, level_codes, level_unit, add");
    CHECK(refusal("step", {}) == "length_samples: is missing, and \"step\" needs it\n  give a whole number");
    CHECK(refusal("step", {{"length_samples", 10.0}}) == "length_samples: needs a whole number");
    CHECK(refusal("step", {{"length_samples", ten}, {"level_ratio", std::string("half")}}) ==
          "level_ratio: needs a number");
    CHECK(refusal("noise", {{"length_samples", ten}, {"distribution", 1.0}}) == "distribution: needs a string");
    CHECK(refusal("noise", {{"length_samples", ten}, {"distribution", std::string("gaussian")}}) ==
          "distribution: \"gaussian\" is not a choice\n  choices: uniform, normal");
    CHECK(refusal("multitone", {{"length_samples", ten}, {"frequencies_hz", 5.0}}) ==
          "frequencies_hz: needs a list of numbers");
    CHECK(refusal("multitone", {{"length_samples", ten}, {"frequencies_hz", std::vector<double>{}}}) ==
          "frequencies_hz: the list is empty\n  give at least one number");
}

TEST_CASE("refusal: a length or a start outside the range", "[stimuli]") {
    CHECK(refusal("step", {{"length_samples", std::int64_t{0}}}) ==
          "length_samples: 0 samples is below the least, 1 samples\n  give 1 or more");
    CHECK(refusal("step", {{"length_samples", std::int64_t{1}}}) == "accepted");
    CHECK(refusal("step", {{"length_samples", std::int64_t{10'000'000'001}}}) ==
          "length_samples: 10000000001 samples is above the largest, 10000000000 samples\n"
          "  give 10000000000 or less");
    CHECK(refusal("step", {{"length_samples", std::int64_t{10'000'000'000}}}) == "accepted");
    CHECK(refusal("step", {{"length_samples", ten}, {"at_samples", std::int64_t{-1}}}) ==
          "at_samples: -1 samples is below the least, 0 samples\n  give 0 or more");
    for (const auto shape : {"step", "impulse", "noise"}) {
        CHECK(refusal(shape, {{"length_samples", ten}, {"at_samples", ten}}) ==
              "at_samples: 10 is not below length_samples = 10, so nothing would happen\n"
              "  start earlier, or make the stimulus longer");
        CHECK(refusal(shape, {{"length_samples", ten}, {"at_samples", std::int64_t{9}}}) == "accepted");
    }
}

TEST_CASE("refusal: a level beyond full scale, not a number, or silence where there must be a signal", "[stimuli]") {
    CHECK(refusal("step", {{"length_samples", ten}, {"level_ratio", 1.5}}) ==
          "level_ratio: 1.5 of full scale is above the largest, 1 of full scale\n  give 1 or less");
    CHECK(refusal("step", {{"length_samples", ten}, {"level_ratio", -1.0000000000000002}}) ==
          "level_ratio: -1.0000000000000002 of full scale is below the least, -1 of full scale\n  give -1 or more");
    CHECK(refusal("step", {{"length_samples", ten}, {"level_ratio", std::nan("")}}) ==
          "level_ratio: nan is not finite\n  give a number");
    CHECK(refusal("step", {{"length_samples", ten}, {"level_ratio", 0.0}}) == "accepted");
    CHECK(refusal("step", {{"length_samples", ten}, {"level_ratio", std::int64_t{-1}}}) == "accepted");
    CHECK(refusal("noise", {{"length_samples", ten}, {"level_ratio", 0.0}}) ==
          "level_ratio: 0 of full scale is not above 0 of full scale\n  give more than 0");
    CHECK(refusal("noise", {{"length_samples", ten}, {"level_ratio", -0.5}}) ==
          "level_ratio: -0.5 of full scale is not above 0 of full scale\n  give more than 0");
}

TEST_CASE("refusal: a level in codes that the format does not have, or beside a ratio", "[stimuli]") {
    const auto step = [](std::int64_t codes, const char* format) {
        return refusal("step", {{"length_samples", ten}, {"level_codes", codes}}, 48000.0, format);
    };
    CHECK(step(32768, "q15") == "level_codes: 32768 is not a code of q15\n  give a whole number from -32768 to 32767");
    CHECK(step(32767, "q15") == "accepted");
    CHECK(step(-32769, "i16") ==
          "level_codes: -32769 is not a code of i16\n  give a whole number from -32768 to 32767");
    CHECK(step(-32768, "i16") == "accepted");
    CHECK(step(2147483648, "q31") ==
          "level_codes: 2147483648 LSB is above the largest, 2147483647 LSB\n  give 2147483647 or less");
    CHECK(step(-2147483648, "i32") == "accepted");
    CHECK(step(1, "f32") == "level_codes: format f32 has no LSB\n  give level_ratio instead");
    CHECK(refusal("sine", {{"length_samples", ten}, {"frequency_hz", 100.0}, {"level_codes", std::int64_t{40000}}}) ==
          "level_codes: 40000 is not a code of q15\n  give a whole number from 1 to 32767");
    CHECK(refusal("sine", {{"length_samples", ten}, {"frequency_hz", 100.0}, {"level_codes", std::int64_t{0}}}) ==
          "level_codes: 0 LSB is below the least, 1 LSB\n  give 1 or more");
    CHECK(refusal("step", {{"length_samples", ten}, {"level_codes", ten}, {"level_ratio", 0.5}}) ==
          "level_codes: level_ratio is given too\n  keep one of the two");
}

TEST_CASE("refusal: frequencies at and below 0 Hz or above Nyquist", "[stimuli]") {
    const auto sine = [](double frequency_hz, double phase_turns = 0.25) {
        return refusal("sine", {{"length_samples", ten}, {"frequency_hz", frequency_hz}, {"phase_turns", phase_turns}},
                       1200.0);
    };
    CHECK(sine(0.0) == "frequency_hz: 0 Hz is not above 0 Hz\n  give more than 0");
    CHECK(sine(5e-324) == "accepted");
    CHECK(sine(-1.0) == "frequency_hz: -1 Hz is not above 0 Hz\n  give more than 0");
    CHECK(sine(600.0) == "accepted");
    CHECK(sine(600.0000000000001) ==
          "frequency_hz: 600.0000000000001 Hz is above Nyquist, 600 Hz at rate_hz = 1200\n"
          "  give a frequency not above Nyquist, or correct rate_hz");
    for (const double phase_turns : {0.0, 0.5, -0.5, 1.0}) {
        CHECK(sine(600.0, phase_turns) ==
              "phase_turns: a sine of 600 Hz, Nyquist, with phase_turns = " + number_text(phase_turns) +
                  " is zero in every sample\n"
                  "  give phase_turns = 0.25, or a lower frequency");
    }
    CHECK(sine(300.0, 1.5) == "phase_turns: 1.5 turns is above the largest, 1 turns\n  give 1 or less");

    const auto chirp = [](double from_hz, double to_hz) {
        return refusal("chirp", {{"length_samples", ten}, {"from_hz", from_hz}, {"to_hz", to_hz}}, 1200.0);
    };
    CHECK(chirp(0.0, 100.0) == "from_hz: 0 Hz is not above 0 Hz\n  give more than 0");
    CHECK(chirp(100.0, 700.0) ==
          "to_hz: 700 Hz is above Nyquist, 600 Hz at rate_hz = 1200\n"
          "  give a frequency not above Nyquist, or correct rate_hz");
    CHECK(chirp(100.0, 100.0) ==
          "to_hz: 100 Hz equals from_hz, so nothing sweeps\n  give another frequency, or use shape = \"sine\"");
    CHECK(chirp(100.0, 600.0) == "accepted");
    CHECK(chirp(600.0, 100.0) == "accepted");
    CHECK(refusal("chirp", {{"length_samples", ten}, {"from_hz", 1.0}}) ==
          "to_hz: is missing, and \"chirp\" needs it\n  give a number");
}

TEST_CASE("refusal: tones that repeat, are too many or above Nyquist", "[stimuli]") {
    const auto multitone = [](std::vector<double> tones) {
        return refusal("multitone", {{"length_samples", ten}, {"frequencies_hz", std::move(tones)}}, 48000.0);
    };
    CHECK(multitone({100.0, 250.5, 100.0}) == "frequencies_hz: 100 Hz is there twice\n  give each frequency once");
    CHECK(multitone({100.0, 24000.5}) ==
          "frequencies_hz: 24000.5 Hz is above Nyquist, 24000 Hz at rate_hz = 48000\n"
          "  give a frequency not above Nyquist, or correct rate_hz");
    std::vector<double> tones;
    for (int k = 1; k <= 1000; ++k) tones.push_back(k);
    CHECK(multitone(tones) == "accepted");
    tones.push_back(1001.0);
    CHECK(multitone(tones) == "frequencies_hz: 1001 tones are too many\n  give at most 1000");
}

TEST_CASE("refusal: seeds that not every tool could keep, and rates that are none", "[stimuli]") {
    CHECK(refusal("noise", {{"length_samples", ten}, {"seed", std::int64_t{-1}}}) ==
          "seed: -1 is below the least, 0\n  give 0 or more");
    CHECK(refusal("noise", {{"length_samples", ten}, {"seed", std::int64_t{1} << 53}}) ==
          "seed: 9007199254740992 is above the largest, 9007199254740991\n  give 9007199254740991 or less");
    CHECK(refusal("noise", {{"length_samples", ten}, {"seed", (std::int64_t{1} << 53) - 1}}) == "accepted");
    CHECK(refusal("step", {{"length_samples", ten}}, 0.0) ==
          "rate_hz: 0 Hz is no sample rate\n  give a finite rate above 0 Hz");
    CHECK(refusal("step", {{"length_samples", ten}}, std::nan("")) ==
          "rate_hz: nan Hz is no sample rate\n  give a finite rate above 0 Hz");
}
