// Realisations: stretches of a sine or a multitone with phases of their own. Their phases against an independent
// Philox and mpmath: tests/reference/stimuli_test.py.
#include <algorithm>
#include <cmath>
#include <cstdint>

#include "make.hpp"

using namespace halflsb;

namespace {

constexpr std::int64_t length = 1013, at = 7, count = 5, each = 201;  // floor((1013 - 7) / 5), and one left over

std::unique_ptr<const Stimulus> sine(std::int64_t realisations, std::int64_t seed = 1, double frequency_hz = 997.1) {
    return made("sine", {{"length_samples", length},
                         {"at_samples", at},
                         {"frequency_hz", frequency_hz},
                         {"phase_turns", 0.1},
                         {"realisations", realisations},
                         {"seed", seed}});
}

std::unique_ptr<const Stimulus> multitone(std::int64_t realisations, std::int64_t seed = 1) {
    return made("multitone", {{"length_samples", length},
                              {"at_samples", at},
                              {"frequencies_hz", std::vector<double>{440.0, 997.1, 12345.6}},
                              {"realisations", realisations},
                              {"seed", seed}});
}

/// A sine obeys x[n] + x[n - 2] = 2 cos(2 pi f) x[n - 1]; where it does not, its phase has changed.
std::vector<std::size_t> where_it_breaks(const std::vector<double>& x, double cycles_per_sample) {
    const double twice_cosine = 2.0 * std::cos(6.283185307179586 * cycles_per_sample);
    std::vector<std::size_t> found;
    for (std::size_t n = 2; n < x.size(); ++n)
        if (std::abs(x[n] + x[n - 2] - twice_cosine * x[n - 1]) > 1e-12) found.push_back(n);
    return found;
}

}  // namespace

TEST_CASE("realisations: the phase changes at each border and nowhere else", "[stimuli]") {
    const auto x = ratios_of(*sine(count), at, static_cast<std::size_t>(length - at));
    std::vector<std::size_t> borders;
    for (std::int64_t k = 1; k < count; ++k) {
        // The two triples that straddle the border; what is left over after the last stretch breaks nothing.
        borders.push_back(static_cast<std::size_t>(k * each));
        borders.push_back(static_cast<std::size_t>(k * each + 1));
    }
    CHECK(where_it_breaks(x, 997.1 / 48000.0) == borders);
    CHECK(where_it_breaks(ratios_of(*sine(1), at, static_cast<std::size_t>(length - at)), 997.1 / 48000.0).empty());
}

TEST_CASE("realisations: the first has the phases of a stimulus with no other", "[stimuli]") {
    constexpr auto first = static_cast<std::size_t>(at + each);
    for (const std::int64_t seed : {1, 9}) {
        CHECK(ratios_of(*sine(count, seed), 0, first) == ratios_of(*sine(1), 0, first));
        CHECK(ratios_of(*multitone(count, seed), 0, first) == ratios_of(*multitone(1, seed), 0, first));
        CHECK(ratios_of(*sine(count, seed), at + each, 9) != ratios_of(*sine(1), at + each, 9));
        CHECK(ratios_of(*multitone(count, seed), at + each, 9) != ratios_of(*multitone(1, seed), at + each, 9));
    }
    // The seed of a sine says nothing of its first stretch, and that of a single one says nothing at all.
    CHECK(ratios_of(*sine(1, 1), 0, 1013) == ratios_of(*sine(1, 2), 0, 1013));
    CHECK(ratios_of(*sine(count, 1), at + each, 9) != ratios_of(*sine(count, 2), at + each, 9));
}

TEST_CASE("realisations: any split into blocks, from the back to the front, gives the same codes", "[stimuli]") {
    for (const int shape : {0, 1, 2}) {
        const auto stimulus = shape == 0 ? sine(count) : shape == 1 ? multitone(count) : sine(15);
        const auto whole = ratios_of(*stimulus, -3, length + 10);
        for (const std::size_t block : {std::size_t{1}, std::size_t{7}, std::size_t{200}, std::size_t{256},
                                        static_cast<std::size_t>(length - 1)}) {
            for (std::size_t first = (whole.size() - 1) / block * block;; first -= block) {
                const std::size_t size = std::min(block, whole.size() - first);
                const auto part = ratios_of(*stimulus, static_cast<std::int64_t>(first) - 3, size);
                REQUIRE(std::equal(part.begin(), part.end(), whole.begin() + static_cast<std::ptrdiff_t>(first)));
                if (first == 0) break;
            }
        }
    }
}

TEST_CASE("realisations: each, each frequency and each seed has phases of its own, spread over the turn", "[stimuli]") {
    // A quarter of the rate reads the phase off: x[0] = sin, x[1] = cos.
    constexpr std::int64_t many = 1000, samples = 64;
    const auto phases_of = [=](double frequency_hz, std::int64_t seed) {
        const auto stimulus = made("sine", {{"length_samples", many * samples},
                                            {"frequency_hz", frequency_hz},
                                            {"realisations", many},
                                            {"seed", seed},
                                            {"level_ratio", 1.0}});
        std::vector<double> turns;
        for (std::int64_t k = 1; k < many; ++k) {
            const auto x = ratios_of(*stimulus, k * samples, 2);
            const double w = 6.283185307179586 * frequency_hz / 48000.0;
            turns.push_back(std::atan2(x[0], (x[1] - x[0] * std::cos(w)) / std::sin(w)) / 6.283185307179586);
        }
        return turns;
    };
    const auto turns = phases_of(12000.0, 1), of_other_tone = phases_of(12001.0, 1),
               of_other_seed = phases_of(12000.0, 2);
    const auto mean_turn = [](const std::vector<double>& a, const std::vector<double>* b) {
        double cosine = 0.0, sine = 0.0;
        for (std::size_t k = 0; k < a.size(); ++k) {
            const double angle = 6.283185307179586 * (a[k] - (b != nullptr ? (*b)[k] : 0.0));
            cosine += std::cos(angle);
            sine += std::sin(angle);
        }
        return std::hypot(cosine, sine) / static_cast<double>(a.size());
    };
    // Rayleigh: of K independent phases P(mean > r) = e^(-K r^2); 0.12 and 999 make it 6e-7. One fixed draw.
    CHECK(mean_turn(turns, nullptr) < 0.12);
    CHECK(mean_turn(turns, &of_other_tone) < 0.12);
    CHECK(mean_turn(turns, &of_other_seed) < 0.12);
    auto sorted = turns;
    std::sort(sorted.begin(), sorted.end());
    CHECK(std::adjacent_find(sorted.begin(), sorted.end()) == sorted.end());
    // A multitone under the same seed, of that tone alone, draws the same.
    const auto one = made("multitone", {{"length_samples", many * samples},
                                        {"frequencies_hz", std::vector<double>{12000.0}},
                                        {"realisations", many},
                                        {"level_ratio", 1.0}});
    const auto alone = made(
        "sine",
        {{"length_samples", many * samples}, {"frequency_hz", 12000.0}, {"realisations", many}, {"level_ratio", 1.0}});
    CHECK(ratios_of(*one, samples, 4000) == ratios_of(*alone, samples, 4000));
}

TEST_CASE("realisations: stretches too short for a response are refused, with what would do", "[stimuli]") {
    const auto of = [](std::int64_t samples, std::int64_t start, std::int64_t realisations) {
        const std::string sine = refusal("sine", {{"length_samples", samples},
                                                  {"at_samples", start},
                                                  {"frequency_hz", 1000.0},
                                                  {"realisations", realisations}});
        CHECK(sine == refusal("multitone", {{"length_samples", samples},
                                            {"at_samples", start},
                                            {"frequencies_hz", std::vector<double>{1000.0}},
                                            {"realisations", realisations}}));
        return sine;
    };
    CHECK(of(1, 0, 1) == "accepted");
    CHECK(of(1024, 0, 16) == "accepted");
    CHECK(of(1023, 0, 16) ==
          "realisations: 16 realisations of 1023 samples have 63 each, and the least is 64\n"
          "  give at most 15, or a length_samples of at least 1024");
    CHECK(of(1023, 0, 15) == "accepted");
    CHECK(of(1025, 2, 16) ==
          "realisations: 16 realisations of 1023 samples have 63 each, and the least is 64\n"
          "  give at most 15, or a length_samples of at least 1026");
    CHECK(of(1026, 2, 16) == "accepted");
    CHECK(of(127, 0, 2) ==
          "realisations: 2 realisations of 127 samples have 63 each, and the least is 64\n"
          "  leave it out, or a length_samples of at least 128");
    CHECK(of(10'000'000'000, 9'999'999'900, 2) ==
          "realisations: 2 realisations of 100 samples have 50 each, and the least is 64\n  leave it out");
    CHECK(of(10'000'000'000, 0, 1000) == "accepted");
    CHECK(of(100'000, 0, 1001) == "realisations: 1001 is above the largest, 1000\n  give 1000 or less");
    CHECK(of(100'000, 0, 0) == "realisations: 0 is below the least, 1\n  give 1 or more");
}

TEST_CASE("realisations: the spectrum says where they begin and how long they are", "[stimuli]") {
    using Stretches = Spectrum::Realisations;
    CHECK(sine(1)->spectrum().realisations == Stretches{});
    CHECK(multitone(1)->spectrum().realisations == Stretches{});
    CHECK(sine(count)->spectrum().realisations == Stretches{at, each, count});
    CHECK(multitone(count)->spectrum().realisations == Stretches{at, each, count});
}

TEST_CASE("add: tones keep their realisations when they are the same, the others' tones are left out", "[stimuli]") {
    using Stretches = Spectrum::Realisations;
    const auto tone = [](double frequency_hz, std::int64_t realisations, std::int64_t start = 0) {
        return words("sine", {{"frequency_hz", frequency_hz}, {"realisations", realisations}, {"at_samples", start}});
    };
    const auto sum = [](std::int64_t realisations, std::vector<StimulusWords> added) {
        return made("sine", {{"length_samples", std::int64_t{1600}},
                             {"frequency_hz", 4800.0},
                             {"realisations", realisations},
                             {"add", list(std::move(added))}})
            ->spectrum();
    };
    const Spectrum same = sum(16, {tone(480.0, 16), words("step", {})});
    CHECK(same.tones == std::vector<double>{0.01, 0.1});
    CHECK(same.realisations == Stretches{0, 100, 16});
    // Fewer, none, or at another place: no lines of these stretches.
    const Spectrum others = sum(16, {tone(480.0, 8), tone(960.0, 1), tone(1440.0, 16, 32)});
    CHECK(others.tones == std::vector<double>{0.1});
    CHECK(others.realisations == Stretches{0, 100, 16});
    // More of them than the first has.
    const Spectrum more = sum(1, {tone(480.0, 8)});
    CHECK(more.tones == std::vector<double>{0.01});
    CHECK(more.realisations == Stretches{0, 200, 8});
    // One that ends early has no say.
    const Spectrum early = sum(
        1,
        {words("sine",
               {{"frequency_hz", 480.0}, {"realisations", std::int64_t{8}}, {"length_samples", std::int64_t{1500}}})});
    CHECK(early.tones == std::vector<double>{0.1});
    CHECK(early.realisations == Stretches{});
    // Single ones need not begin together.
    CHECK(sum(1, {tone(480.0, 1, 32)}).tones == std::vector<double>{0.01, 0.1});
}

TEST_CASE("sequence: a part's realisations are none of the whole", "[stimuli]") {
    const auto sequence = made("sequence", {{"repeat", std::int64_t{2}},
                                            {"parts", list({words("sine", {{"length_samples", std::int64_t{1000}},
                                                                           {"frequency_hz", 480.0},
                                                                           {"realisations", std::int64_t{4}}})})}});
    CHECK(sequence->spectrum().realisations == Spectrum::Realisations{});
    // A repeat is the same again, its phases too.
    CHECK(ratios_of(*sequence, 0, 1000) == ratios_of(*sequence, 1000, 1000));
}
