// The same codes everywhere: in any split, from any start, on any machine and compiler.
#include <algorithm>
#include <bit>
#include <cmath>
#include <cstdint>

#include "make.hpp"

using namespace halflsb;

namespace {

/// FNV-1a, 64 bits, over the codes as little-endian 32-bit words.
std::uint64_t hash_of(const std::vector<Code>& codes) {
    std::uint64_t hash = 0xcbf29ce484222325;
    for (const Code code : codes) {
        for (int k = 0; k < 4; ++k) {
            hash = (hash ^ (static_cast<std::uint32_t>(code) >> (8 * k) & 0xff)) * 0x100000001b3;
        }
    }
    return hash;
}

std::unique_ptr<const Stimulus> chirp_of(const char* sweep, double from_hz, double to_hz, double rate_hz,
                                         std::int64_t length_samples) {
    return made("chirp",
                {{"sweep", std::string(sweep)},
                 {"from_hz", from_hz},
                 {"to_hz", to_hz},
                 {"length_samples", length_samples},
                 {"level_ratio", 0.7}},
                rate_hz);
}

std::unique_ptr<const Stimulus> noise_of(const char* distribution) {
    return made("noise", {{"length_samples", std::int64_t{10'000'000'000}},
                          {"level_ratio", 0.2},
                          {"seed", (std::int64_t{1} << 52) + 12345},
                          {"distribution", std::string(distribution)}});
}

std::unique_ptr<const Stimulus> sine() {
    return made("sine", {{"length_samples", std::int64_t{10'000'000'000}},
                         {"frequency_hz", 997.1},
                         {"phase_turns", 0.123},
                         {"level_ratio", 0.9}});
}

std::unique_ptr<const Stimulus> multitone() {
    return made("multitone", {{"length_samples", std::int64_t{10'000'000'000}},
                              {"frequencies_hz", std::vector<double>{100.0, 250.5, 1234.5, 19999.9, 24000.0}},
                              {"level_ratio", 0.8},
                              {"seed", std::int64_t{77}}});
}

std::vector<std::unique_ptr<const Stimulus>> one_of_each(std::int64_t length, std::int64_t at) {
    std::vector<std::unique_ptr<const Stimulus>> all;
    all.push_back(made("step", {{"length_samples", length}, {"at_samples", at}}));
    all.push_back(made("impulse", {{"length_samples", length}, {"at_samples", at}}));
    all.push_back(made("sine", {{"length_samples", length}, {"at_samples", at}, {"frequency_hz", 997.0}}));
    all.push_back(made("multitone", {{"length_samples", length},
                                     {"at_samples", at},
                                     {"frequencies_hz", std::vector<double>{440.0, 997.0, 12345.6}}}));
    for (const auto sweep : {"linear", "logarithmic"}) {
        for (const bool up : {true, false}) {
            all.push_back(made("chirp", {{"length_samples", length},
                                         {"at_samples", at},
                                         {"sweep", std::string(sweep)},
                                         {"from_hz", up ? 20.0 : 20000.0},
                                         {"to_hz", up ? 20000.0 : 20.0}}));
        }
    }
    for (const auto distribution : {"uniform", "normal"}) {
        all.push_back(made(
            "noise", {{"length_samples", length}, {"at_samples", at}, {"distribution", std::string(distribution)}}));
    }
    return all;
}

}  // namespace

TEST_CASE("every shape: any split into blocks and any order gives the same codes", "[stimuli]") {
    constexpr std::int64_t length = 2000, at = 5;
    for (const auto& stimulus : one_of_each(length, at)) {
        const auto whole = codes_of(*stimulus, "q31", 0, length + 10);
        for (const std::size_t block : {std::size_t{1}, std::size_t{7}, std::size_t{256}, std::size_t{length - 1}}) {
            // From the back to the front, so that nothing can lean on what came before.
            for (std::size_t first = (whole.size() - 1) / block * block;; first -= block) {
                const std::size_t count = std::min(block, whole.size() - first);
                const auto part = codes_of(*stimulus, "q31", static_cast<std::int64_t>(first), count);
                REQUIRE(std::equal(part.begin(), part.end(), whole.begin() + static_cast<std::ptrdiff_t>(first)));
                if (first == 0) break;
            }
        }
    }
}

TEST_CASE("every shape: the codes are the quantised ratios", "[stimuli]") {
    for (const auto& stimulus : one_of_each(700, 3)) {
        const auto ratios = ratios_of(*stimulus, 0, 700);
        for (const auto name : {"q15", "q31", "i16", "i32", "f32"}) {
            const auto format = format_named(name);
            for (const Rounding rounding : {Rounding::floor, Rounding::half_even}) {
                const auto codes = codes_of(*stimulus, name, 0, 700, rounding);
                for (std::size_t i = 0; i < 700; ++i) {
                    REQUIRE(codes[i] == code_of(format, ratios[i] * full_scale_value(format), rounding));
                }
            }
        }
    }
}

TEST_CASE("every shape: silent before at_samples and from length_samples on, never NaN between", "[stimuli]") {
    for (const auto& stimulus : one_of_each(600, 300)) {
        CHECK(stimulus->length_samples() == 600);
        const auto ratios = ratios_of(*stimulus, -100, 900);
        for (std::size_t i = 0; i < 400; ++i) REQUIRE(ratios[i] == 0.0);
        for (std::size_t i = 400; i < 700; ++i) REQUIRE(std::abs(ratios[i]) < 10.0);
        for (std::size_t i = 700; i < 900; ++i) REQUIRE(ratios[i] == 0.0);
    }
}

TEST_CASE("every shape: the codes of this machine are those of every other", "[stimuli]") {
    // COMPUTED: hashes of the codes that mpmath gives at 50 digits (tests/reference/stimuli_test.py has
    // the same numbers and recomputes them), so a difference is an error here, not there.
    const auto hash = [](const Stimulus& stimulus, const char* format, std::int64_t first, std::size_t count) {
        return hash_of(codes_of(stimulus, format, first, count));
    };
    CHECK(hash(*sine(), "q31", 9'999'990'000, 1500) == 0xf654c48e8e6489c3);
    CHECK(hash(*sine(), "q15", 0, 1500) == 0x90b15188bc0750de);
    CHECK(hash(*multitone(), "q31", 5'000'000'000, 1500) == 0x14ded7e4cf11ec64);
    CHECK(hash(*chirp_of("linear", 0.1, 600.0, 1200.0, 100'000'000), "q31", 33'333'333, 700) == 0x96aa14d5ace61eba);
    CHECK(hash(*chirp_of("linear", 20000.0, 20.0, 48000.0, 20'000), "q15", 0, 700) == 0xeb54a9f1c16abe49);
    CHECK(hash(*chirp_of("logarithmic", 0.1, 600.0, 1200.0, 100'000'000), "q31", 99'999'300, 700) ==
          0x829fd7631e881931);
    CHECK(hash(*chirp_of("logarithmic", 20000.0, 20.0, 48000.0, 20'000), "q31", 0, 700) == 0x319d146aecd5a13a);
    CHECK(hash(*chirp_of("logarithmic", 1.0, 499999.9, 1e6, 10'000'000'000), "q31", 9'999'999'300, 700) ==
          0x7e65cdcb74b074a2);
    CHECK(hash(*noise_of("uniform"), "q31", 8'589'934'591, 2000) == 0x3e6ef740c229f88b);
    CHECK(hash(*noise_of("normal"), "q31", 8'589'934'591, 1000) == 0xdfa3c505273f32a0);
    CHECK(hash(*noise_of("normal"), "q15", 0, 1000) == 0xc170db1ab80e0b62);
}

TEST_CASE("every shape: a hundred thousand codes as this version has always sent them", "[stimuli]") {
    // COMPUTED by this program itself, g++ 12: a change means that stored captures no longer fit their plans.
    const std::vector<std::uint64_t> expected = {
        0xc6d45c1fbb23b5e5, 0x15b1ab42935709e5, 0x7a745ce512030659, 0x3f3981b4f4c2a5d8, 0xf18d321176e18454,
        0xee9ee42990cde9ef, 0x489ec7c895b929dc, 0x8f058f2a026143c3, 0xf01d8735d508230e, 0x647c81804c5003b8};
    std::vector<std::uint64_t> found;
    for (const auto& stimulus : one_of_each(100'000, 17)) {
        found.push_back(hash_of(codes_of(*stimulus, "q31", 0, 100'000)));
    }
    CHECK(found == expected);
}

TEST_CASE("every shape: the ratios before quantising are the same to their last bit", "[stimuli]") {
    // COMPUTED by this program itself, g++ 12. An ulp seldom moves a code, so a fused multiply-add or
    // another library would slip through the hashes of codes; here it shows (with -ffp-contract=fast on
    // a processor that fuses, all but step and impulse and uniform noise differ).
    const std::vector<std::uint64_t> expected = {
        0x066a71d5a003f628, 0xf09bbe56cf0a1948, 0xeb3d4026e7cf86f2, 0x06424749d6783837, 0x3058898002cff81b,
        0x02247f21b495f600, 0x0c8c8d47f389bce4, 0x66f73d53f15f2779, 0x7b38a9bb92aac378, 0x8db0e1e2c3374b50};
    std::vector<std::uint64_t> found;
    for (const auto& stimulus : one_of_each(20'000, 17)) {
        std::vector<Code> words;
        for (const double ratio : ratios_of(*stimulus, 0, 20'000)) {
            const auto bits = std::bit_cast<std::uint64_t>(ratio + 0.0);  // one zero, not two
            words.push_back(static_cast<Code>(static_cast<std::uint32_t>(bits)));
            words.push_back(static_cast<Code>(static_cast<std::uint32_t>(bits >> 32)));
        }
        found.push_back(hash_of(words));
    }
    CHECK(found == expected);
}
