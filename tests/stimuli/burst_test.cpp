#include "make.hpp"

using namespace halflsb;

TEST_CASE("burst: each one is the sine from its start, silence between", "[stimuli]") {
    const auto burst = made("burst", {{"length_samples", std::int64_t{1000}},
                                      {"at_samples", std::int64_t{100}},
                                      {"frequency_hz", 1234.5},
                                      {"phase_turns", 0.1},
                                      {"on_samples", std::int64_t{50}},
                                      {"off_samples", std::int64_t{30}},
                                      {"repeats", std::int64_t{3}}});
    const auto sine =
        made("sine", {{"length_samples", std::int64_t{50}}, {"frequency_hz", 1234.5}, {"phase_turns", 0.1}});
    const auto once = ratios_of(*sine, 0, 50);
    for (const std::int64_t begin : {100, 180, 260}) {
        CHECK(ratios_of(*burst, begin, 50) == once);
        CHECK(ratios_of(*burst, begin + 50, 30) == std::vector<double>(30, 0.0));
    }
    CHECK(ratios_of(*burst, 340, 660) == std::vector<double>(660, 0.0));
    CHECK(burst->spectrum().tones.empty());
    CHECK(burst->spectrum().bands.empty());
}

TEST_CASE("burst: without a number they go on to the end", "[stimuli]") {
    const auto burst = made("burst", {{"length_samples", std::int64_t{10'000'000'000}},
                                      {"frequency_hz", 12000.0},
                                      {"phase_turns", 0.25},
                                      {"on_samples", std::int64_t{3}},
                                      {"off_samples", std::int64_t{2}}});
    CHECK(ratios_of(*burst, 9'999'999'995, 6) == std::vector<double>{0.5, 0, -0.5, 0, 0, 0});
}

TEST_CASE("burst: those that are asked for must fit", "[stimuli]") {
    const auto asked = [](std::int64_t length, std::int64_t repeats) {
        return refusal("burst", {{"length_samples", length},
                                 {"frequency_hz", 1000.0},
                                 {"on_samples", std::int64_t{50}},
                                 {"off_samples", std::int64_t{30}},
                                 {"repeats", repeats}});
    };
    CHECK(asked(210, 3) == "accepted");
    CHECK(asked(209, 3) ==
          "repeats: 3 bursts take 210 samples, from at_samples on there are 209\n"
          "  make the stimulus longer, or the bursts shorter or fewer");
    CHECK(asked(209, 10'000'000'000) ==
          "repeats: 10000000000 bursts take 799999999970 samples, from at_samples on there are 209\n"
          "  make the stimulus longer, or the bursts shorter or fewer");
    CHECK(refusal("burst", {{"length_samples", std::int64_t{49}},
                            {"frequency_hz", 1000.0},
                            {"on_samples", std::int64_t{50}},
                            {"off_samples", std::int64_t{30}}}) ==
          "on_samples: 1 burst takes 50 samples, from at_samples on there are 49\n"
          "  make the stimulus longer, or the bursts shorter or fewer");
    CHECK(refusal("burst", {{"length_samples", std::int64_t{500}},
                            {"frequency_hz", 24000.0},
                            {"on_samples", std::int64_t{50}},
                            {"off_samples", std::int64_t{30}}}) ==
          "phase_turns: a sine of 24000 Hz, Nyquist, with phase_turns = 0 is zero in every sample\n"
          "  give phase_turns = 0.25, or a lower frequency");
}
