// Sine, multitone and chirps: closed forms and symmetries. Against mpmath and SciPy they are compared
// in tests/reference/stimuli_test.py.
#include <algorithm>
#include <array>
#include <cmath>

#include "make.hpp"

using namespace halflsb;

namespace {

constexpr double two_pi = 6.283185307179586;
constexpr std::int64_t longest = 10'000'000'000;

}  // namespace

TEST_CASE("sine: a quarter of the sample rate walks 0, 1, 0, -1 exactly, at any index", "[stimuli]") {
    const auto sine =
        made("sine", {{"length_samples", longest}, {"frequency_hz", 300.0}, {"level_ratio", 1.0}}, 1200.0);
    for (const std::int64_t first : {std::int64_t{0}, std::int64_t{4'000'000}, longest - 8}) {
        CHECK(ratios_of(*sine, first, 8) == std::vector<double>{0, 1, 0, -1, 0, 1, 0, -1});
    }
    CHECK(sine->spectrum().tones == std::vector<double>{0.25});
    CHECK(sine->spectrum().bands.empty());
}

TEST_CASE("sine: its own index 0 stands at at_samples, and the phase counts from there", "[stimuli]") {
    const auto late = made("sine", {{"length_samples", std::int64_t{100}},
                                    {"at_samples", std::int64_t{10}},
                                    {"frequency_hz", 1234.5},
                                    {"phase_turns", 0.3}});
    const auto early =
        made("sine", {{"length_samples", std::int64_t{90}}, {"frequency_hz", 1234.5}, {"phase_turns", 0.3}});
    CHECK(ratios_of(*late, 10, 90) == ratios_of(*early, 0, 90));
    CHECK(ratios_of(*late, 0, 10) == std::vector<double>(10, 0.0));
    CHECK(std::abs(ratios_of(*early, 0, 1)[0] - 0.5 * std::sin(two_pi * 0.3)) < 1e-15);
}

TEST_CASE("sine: a frequency given as a whole number is the same as the real number", "[stimuli]") {
    const auto whole = made("sine", {{"length_samples", std::int64_t{50}}, {"frequency_hz", std::int64_t{1000}}});
    const auto real = made("sine", {{"length_samples", std::int64_t{50}}, {"frequency_hz", 1000.0}});
    CHECK(ratios_of(*whole, 0, 50) == ratios_of(*real, 0, 50));
}

TEST_CASE("sine: at Nyquist a cosine alternates between the ends, a negative phase turns back", "[stimuli]") {
    const auto sine = made("sine", {{"length_samples", std::int64_t{4}},
                                    {"frequency_hz", 24000.0},
                                    {"phase_turns", 0.25},
                                    {"level_codes", std::int64_t{100}}});
    CHECK(codes_of(*sine, "q15", 0, 4) == std::vector<Code>{100, -100, 100, -100});
    const auto back = made("sine", {{"length_samples", std::int64_t{4}},
                                    {"frequency_hz", 24000.0},
                                    {"phase_turns", -0.25},
                                    {"level_codes", std::int64_t{100}}});
    CHECK(codes_of(*back, "q15", 0, 4) == std::vector<Code>{-100, 100, -100, 100});
}

TEST_CASE("multitone: one tone is a sine of the whole level, and tones add up", "[stimuli]") {
    const auto at = [](std::vector<double> tones, std::int64_t seed) {
        return made("multitone", {{"length_samples", std::int64_t{48000}},
                                  {"frequencies_hz", std::move(tones)},
                                  {"level_ratio", 0.9},
                                  {"seed", seed}});
    };
    const auto one = ratios_of(*at({1000.0}, 5), 0, 48000);
    CHECK(*std::max_element(one.begin(), one.end()) <= 0.9);
    double power = 0.0;
    for (const double ratio : one) power += ratio * ratio;
    // 1000 whole cycles: the mean square is level^2 / 2 but for rounding, below 48000 * 2^-53.
    CHECK(std::abs(power / 48000.0 - 0.405) < 1e-11);

    // Orthogonal over a second: K tones have K (level / K)^2 / 2.
    const auto four = ratios_of(*at({440.0, 1000.0, 7001.0, 23999.0}, 5), 0, 48000);
    power = 0.0;
    for (const double ratio : four) power += ratio * ratio;
    CHECK(std::abs(power / 48000.0 - 0.405 / 4.0) < 1e-11);
    CHECK(ratios_of(*at({1000.0}, 5), 0, 10) != ratios_of(*at({1000.0}, 6), 0, 10));
}

TEST_CASE("multitone: the peak never passes the level, and the spectrum lists the tones ascending", "[stimuli]") {
    std::vector<double> tones;
    for (int k = 1000; k >= 1; --k) tones.push_back(k * 24.0);
    for (const std::int64_t seed : {1, 2, 3}) {
        const auto multitone = made(
            "multitone",
            {{"length_samples", std::int64_t{2000}}, {"frequencies_hz", tones}, {"level_ratio", 1.0}, {"seed", seed}});
        for (const double ratio : ratios_of(*multitone, 0, 2000)) REQUIRE(std::abs(ratio) <= 1.0);
        const Spectrum spectrum = multitone->spectrum();
        REQUIRE(spectrum.tones.size() == 1000);
        CHECK(std::is_sorted(spectrum.tones.begin(), spectrum.tones.end()));
        CHECK(spectrum.tones.back() == 0.5);
    }
}

TEST_CASE("chirp: the linear phase is a closed form", "[stimuli]") {
    // From r/8 to r/4 over 2^16 samples the phase is n/8 + n^2/2^20: at n = 2^10 it has turned 129 times,
    // at n = 2^9 it stands at a quarter of a turn.
    const auto chirp =
        made("chirp",
             {{"length_samples", std::int64_t{65536}}, {"from_hz", 6000.0}, {"to_hz", 12000.0}, {"level_ratio", 1.0}});
    CHECK(ratios_of(*chirp, 0, 1)[0] == 0.0);
    CHECK(ratios_of(*chirp, 1024, 1)[0] == 0.0);
    CHECK(ratios_of(*chirp, 512, 1)[0] == 1.0);
    CHECK(ratios_of(*chirp, 65536, 2) == std::vector<double>{0, 0});
    REQUIRE(chirp->spectrum().bands.size() == 1);
    CHECK(chirp->spectrum().bands[0].from_cycles_per_sample == 0.125);
    CHECK(chirp->spectrum().bands[0].to_cycles_per_sample == 0.25);
}

TEST_CASE("chirp: swept down it is the upward sweep read backwards", "[stimuli]") {
    // phase_down(N - m) = phase_down(N) - phase_up(m), and the linear end phase N (f0 + f1) / 2r is
    // 4096 / 4 here, whole turns, so the values are each other's negatives.
    const auto up = made("chirp", {{"length_samples", std::int64_t{4096}}, {"from_hz", 3000.0}, {"to_hz", 21000.0}});
    const auto down = made("chirp", {{"length_samples", std::int64_t{4096}}, {"from_hz", 21000.0}, {"to_hz", 3000.0}});
    const auto rising = ratios_of(*up, 0, 4096);
    const auto falling = ratios_of(*down, 0, 4096);
    for (std::size_t m = 1; m < 4096; ++m) REQUIRE(std::abs(falling[4096 - m] + rising[m]) < 1e-15);
}

TEST_CASE("chirp: the frequency is from_hz at the start and to_hz at the end", "[stimuli]") {
    // Counted in zero crossings of 20,000 samples at either end of a slow sweep.
    for (const auto sweep : {"linear", "logarithmic"}) {
        const std::int64_t length = 100'000'000;
        const auto chirp =
            made("chirp",
                 {{"length_samples", length}, {"from_hz", 240.0}, {"to_hz", 9600.0}, {"sweep", std::string(sweep)}});
        const auto cycles = [&](std::int64_t first) {
            const auto ratios = ratios_of(*chirp, first, 20'000);
            int rising = 0;
            for (std::size_t i = 1; i < ratios.size(); ++i) rising += ratios[i - 1] < 0.0 && ratios[i] >= 0.0;
            return rising;
        };
        // 20,000 samples are 100 and 4000 cycles; the sweep moves them by less than one, the edges by one.
        CHECK(std::abs(cycles(0) - 100) <= 2);
        CHECK(std::abs(cycles(length - 20'000) - 4000) <= 2);
        // The middle tells the sweeps apart: 4920 Hz, and sqrt(240 * 9600) = 1517.9 Hz.
        CHECK(std::abs(cycles(length / 2) - (sweep == std::string("linear") ? 2050 : 632)) <= 2);
    }
}

TEST_CASE("chirp: a start at at_samples sweeps over what is left", "[stimuli]") {
    for (const auto sweep : {"linear", "logarithmic"}) {
        const auto late = made("chirp", {{"length_samples", std::int64_t{1000}},
                                         {"at_samples", std::int64_t{400}},
                                         {"from_hz", 20.0},
                                         {"to_hz", 20000.0},
                                         {"sweep", std::string(sweep)}});
        const auto alone = made("chirp", {{"length_samples", std::int64_t{600}},
                                          {"from_hz", 20.0},
                                          {"to_hz", 20000.0},
                                          {"sweep", std::string(sweep)}});
        CHECK(ratios_of(*late, 400, 600) == ratios_of(*alone, 0, 600));
    }
}

TEST_CASE("chirp: the farthest corners of frequency and rate stay within the level", "[stimuli]") {
    for (const auto sweep : {"linear", "logarithmic"}) {
        for (const auto& [from, to, rate] :
             {std::array{1e-300, 0.5, 1.0}, std::array{0.5, 1e-300, 1.0}, std::array{5e-324, 5e307, 1e308},
              std::array{0.25, 0.25000000000000006, 1.0}}) {
            const auto chirp = made(
                "chirp", {{"length_samples", longest}, {"from_hz", from}, {"to_hz", to}, {"sweep", std::string(sweep)}},
                rate);
            for (const double ratio : ratios_of(*chirp, longest - 1000, 1000)) REQUIRE(std::abs(ratio) <= 0.5);
        }
    }
}
