#include <algorithm>

#include "make.hpp"

using namespace halflsb;

namespace {

/// How many samples each level lasts, from the first on; the last run may be cut off.
std::vector<int> runs_of(const Stimulus& square, std::int64_t first, std::size_t count) {
    const auto ratios = ratios_of(square, first, count);
    std::vector<int> runs = {0};
    for (std::size_t i = 0; i < ratios.size(); ++i) {
        if (i > 0 && ratios[i] != ratios[i - 1]) runs.push_back(0);
        ++runs.back();
    }
    return runs;
}

}  // namespace

TEST_CASE("square: with a whole period its edges stand for ever", "[stimuli]") {
    // 1000 Hz at 48000 Hz is 1/48, which no binary fraction is.
    const auto by_frequency =
        made("square", {{"length_samples", std::int64_t{10'000'000'000}}, {"frequency_hz", 1000.0}});
    const auto by_period =
        made("square", {{"length_samples", std::int64_t{10'000'000'000}}, {"period_samples", std::int64_t{48}}});
    for (const std::int64_t first : {std::int64_t{0}, std::int64_t{48} * 200'000'000}) {
        CHECK(runs_of(*by_frequency, first, 480) == std::vector<int>(20, 24));
        CHECK(ratios_of(*by_frequency, first, 480) == ratios_of(*by_period, first, 480));
    }
    CHECK(ratios_of(*by_period, 0, 1)[0] == 0.5);
    CHECK(ratios_of(*by_period, 24, 1)[0] == -0.5);
}

TEST_CASE("square: the duty counts whole samples where it means them", "[stimuli]") {
    const auto high = [](std::int64_t period, double duty) {
        return runs_of(*made("square", {{"length_samples", 4 * period}, {"period_samples", period}, {"duty", duty}}), 0,
                       static_cast<std::size_t>(4 * period))[0];
    };
    CHECK(high(10, 0.1) == 1);
    CHECK(high(10, 0.3) == 3);
    CHECK(high(10, 0.7) == 7);
    CHECK(high(10, 0.9) == 9);
    CHECK(high(3, 1.0 / 3.0) == 1);
    CHECK(high(3, 2.0 / 3.0) == 2);
    CHECK(high(3, 0.6666666666666667) == 2);
    CHECK(high(10, 0.25) == 3);  // high while its phase is below the duty: 0, 0.1, 0.2
    CHECK(high(10, 0.2500001) == 3);
    CHECK(high(1000, 0.5) == 500);
}

TEST_CASE("square: a period between samples has edges that walk, and the right count", "[stimuli]") {
    // 3.2 samples a period: 5 periods are 16 samples, edges where n / 3.2 passes 0 and 1/2.
    const auto square = made("square", {{"length_samples", std::int64_t{1600}}, {"frequency_hz", 15000.0}});
    CHECK(runs_of(*square, 0, 16) == std::vector<int>{2, 2, 1, 2, 1, 2, 2, 1, 2, 1});
    CHECK(ratios_of(*square, 16, 16) == ratios_of(*square, 1584, 16));
}

TEST_CASE("square: no spectrum is claimed", "[stimuli]") {
    const auto square = made("square", {{"length_samples", std::int64_t{100}}, {"frequency_hz", 1000.0}});
    CHECK(square->spectrum().bands.empty());
    CHECK(square->spectrum().tones.empty());
}

TEST_CASE("square: one of frequency and period, and levels that last a sample", "[stimuli]") {
    const std::int64_t ten = 10;
    CHECK(refusal("square", {{"length_samples", ten}}) ==
          "frequency_hz: \"square\" needs frequency_hz or period_samples\n  give one of the two");
    CHECK(refusal("square", {{"length_samples", ten}, {"frequency_hz", 100.0}, {"period_samples", ten}}) ==
          "period_samples: frequency_hz is given too\n  keep one of the two");
    CHECK(refusal("square", {{"length_samples", ten}, {"frequency_hz", 24001.0}}) ==
          "frequency_hz: 24001 Hz is above Nyquist, 24000 Hz at rate_hz = 48000\n"
          "  give a frequency not above Nyquist, or correct rate_hz");
    CHECK(refusal("square", {{"length_samples", ten}, {"frequency_hz", 24000.0}}) == "accepted");
    CHECK(refusal("square", {{"length_samples", ten}, {"frequency_hz", 4.8e-6}}) == "accepted");
    CHECK(refusal("square", {{"length_samples", ten}, {"frequency_hz", 4.7e-6}}) ==
          "frequency_hz: 4.7e-06 Hz has a period of 10212765957.446808 samples, longer than any stimulus\n"
          "  give a higher frequency, or use shape = \"step\"");
    CHECK(refusal("square", {{"length_samples", ten}, {"frequency_hz", 5e-324}}) ==
          "frequency_hz: 5e-324 Hz has a period of inf samples, longer than any stimulus\n"
          "  give a higher frequency, or use shape = \"step\"");
    CHECK(refusal("square", {{"length_samples", ten}, {"period_samples", ten}, {"duty", 0.09}}) ==
          "duty: with 0.09 of a period of 10 samples one of the levels lasts less than a sample\n"
          "  give a duty nearer to 0.5, or a longer period");
    CHECK(refusal("square", {{"length_samples", ten}, {"period_samples", ten}, {"duty", 0.1}}) == "accepted");
    CHECK(refusal("square", {{"length_samples", ten}, {"period_samples", ten}, {"duty", 0.9}}) == "accepted");
    CHECK(refusal("square", {{"length_samples", ten}, {"period_samples", ten}, {"duty", 1.0}}) ==
          "duty: with 1 of a period of 10 samples one of the levels lasts less than a sample\n"
          "  give a duty nearer to 0.5, or a longer period");
    CHECK(refusal("square", {{"length_samples", ten}, {"period_samples", ten}, {"duty", 0.0}}) ==
          "duty: 0 of a period is not above 0 of a period\n  give more than 0");
}
