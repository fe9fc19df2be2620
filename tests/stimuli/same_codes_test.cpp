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

/// 1000 stretches of 9,999,999 samples.
std::unique_ptr<const Stimulus> realised(const char* shape) {
    const bool is_sine = std::string_view(shape) == "sine";
    ParameterValues values = values_of({{"length_samples", std::int64_t{10'000'000'000}},
                                        {"at_samples", std::int64_t{123}},
                                        {"realisations", std::int64_t{1000}},
                                        {"level_ratio", 0.8},
                                        {"seed", (std::int64_t{1} << 52) + 77}});
    if (is_sine) {
        values.set("frequency_hz", 997.1);
    } else {
        values.set("frequencies_hz", std::vector<double>{100.0, 250.5, 1234.5, 19999.9, 24000.0});
    }
    return std::move(make_stimulus(shape, values, {48000.0, format_named("q15")})).value();
}

ParameterValue sawtooth_file() {
    std::vector<double> codes;
    for (int i = 0; i < 1000; ++i) codes.push_back(i * 7919 % 65536 - 32768);
    return std::make_shared<const SignalFile>(SignalFile{"a.csv", {}, {std::move(codes)}, true, {}});
}

std::unique_ptr<const Stimulus> sequence_and_sum() {
    return made(
        "sequence",
        {{"repeat", std::int64_t{2}},
         {"parts",
          list({words("ramp", {{"length_samples", std::int64_t{400}}, {"from_ratio", -0.5}, {"to_ratio", 0.5}}),
                words("silence", {{"length_samples", std::int64_t{100}}}),
                words("sine",
                      {{"length_samples", std::int64_t{700}}, {"frequency_hz", 1234.5}, {"level_ratio", 0.4}})})},
         {"add", list({words("sine", {{"frequency_hz", 3.3}, {"level_ratio", 0.3}}),
                       words("step", {{"length_samples", std::int64_t{1500}},
                                      {"at_samples", std::int64_t{1000}},
                                      {"level_ratio", 0.125}})})}});
}

/// All but the sequence begin at `at`; the file's samples repeat to the end.
void append_newer_shapes(std::vector<std::unique_ptr<const Stimulus>>& all, std::int64_t length, std::int64_t at) {
    all.push_back(
        made("ramp", {{"length_samples", length}, {"at_samples", at}, {"from_ratio", -0.9}, {"to_ratio", 0.7}}));
    all.push_back(
        made("ramp", {{"length_samples", length}, {"at_samples", at}, {"from_ratio", 0.9}, {"to_ratio", -1.0 / 3.0}}));
    all.push_back(
        made("square", {{"length_samples", length}, {"at_samples", at}, {"frequency_hz", 997.0}, {"duty", 0.3}}));
    for (const std::int64_t order : {9, 11, 15, 20, 23, 31}) {
        all.push_back(made("prbs", {{"length_samples", length}, {"at_samples", at}, {"order", order}}));
    }
    all.push_back(made("burst", {{"length_samples", length},
                                 {"at_samples", at},
                                 {"frequency_hz", 997.0},
                                 {"on_samples", std::int64_t{111}},
                                 {"off_samples", std::int64_t{37}}}));
    all.push_back(made("file",
                       {{"length_samples", length},
                        {"at_samples", at},
                        {"file", sawtooth_file()},
                        {"holds", std::string("unit")},
                        {"repeat", std::int64_t{1'000'000}}},
                       48000.0, "q15", 40000.0));
    all.push_back(made("sequence",
                       {{"parts", list({words("silence", {{"length_samples", at}}),
                                        words("sine", {{"length_samples", length - at}, {"frequency_hz", 55.5}})})},
                        {"add", list({words("noise", {{"at_samples", at}}),
                                      words("ramp", {{"at_samples", at}, {"from_ratio", 0.0}, {"to_ratio", 0.1}})})}}));
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
    append_newer_shapes(all, length, at);
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
        for (const SampleFormat& format : sample_formats()) {
            const std::string name(format.name);
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
    // Each span holds the border before the last stretch.
    CHECK(hash(*realised("sine"), "q31", 9'989'998'624, 1500) == 0xf3eea8faa2840d9c);
    CHECK(hash(*realised("multitone"), "q31", 9'989'998'624, 1500) == 0x68e44310cdee0bc2);
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
    constexpr std::int64_t longest = 10'000'000'000;
    const auto ramp = made("ramp", {{"length_samples", longest}, {"from_ratio", 1.0 / 3.0}, {"to_ratio", 0.7}});
    CHECK(hash(*ramp, "q31", 3'333'333'333, 500) == 0xc8f934449d54f8a5);
    const auto square =
        made("square", {{"length_samples", longest}, {"frequency_hz", 997.1}, {"duty", 0.3}, {"level_ratio", 0.75}});
    CHECK(hash(*square, "q31", 9'999'999'000, 1000) == 0x7b6d60ee9a951465);
    const auto burst = made("burst", {{"length_samples", longest},
                                      {"frequency_hz", 997.1},
                                      {"phase_turns", 0.2},
                                      {"on_samples", std::int64_t{333}},
                                      {"off_samples", std::int64_t{77}},
                                      {"repeats", std::int64_t{20'000'000}},
                                      {"level_ratio", 0.6}});
    CHECK(hash(*burst, "q31", 8'000'000'123, 1500) == 0xe46353c937e45d71);
    const auto prbs = made("prbs", {{"length_samples", longest}, {"order", std::int64_t{31}}});
    CHECK(hash(*prbs, "q15", 9'999'999'800, 200) == 0x000abcae0c886707);
    CHECK(hash(*sequence_and_sum(), "q31", 0, 2400) == 0xeed99954c3b39e27);
}

TEST_CASE("every shape: a hundred thousand codes as this version has always sent them", "[stimuli]") {
    // COMPUTED by this program itself, g++ 12: a change means that stored captures no longer fit their plans.
    const std::vector<std::uint64_t> expected = {
        0xc6d45c1fbb23b5e5, 0x15b1ab42935709e5, 0x7a745ce512030659, 0x3f3981b4f4c2a5d8, 0xf18d321176e18454,
        0xee9ee42990cde9ef, 0x489ec7c895b929dc, 0x8f058f2a026143c3, 0xf01d8735d508230e, 0x647c81804c5003b8,
        0x9816802fe5d5b3d4, 0xdc043ffd6ee877c2, 0x4ba7cc2479102065, 0xb03b68ccaadf6865, 0xc2d61b1bc3391565,
        0x5626d6644ef134e5, 0xacbe3201b9274465, 0x9c7bc033794cb565, 0x1e788331bcf800e5, 0x4ece429570a7034c,
        0xdcdcdb280b02bc80, 0x5af26a29c738784f};
    std::vector<std::uint64_t> found;
    for (const auto& stimulus : one_of_each(100'000, 17)) {
        found.push_back(hash_of(codes_of(*stimulus, "q31", 0, 100'000)));
    }
    CHECK(found == expected);
}

TEST_CASE("every shape: the ratios before quantising are the same to their last bit", "[stimuli]") {
    // COMPUTED by this program itself, g++ 12. An ulp seldom moves a code, so a fused multiply-add or
    // another library would slip through the hashes of codes; here it shows (with -ffp-contract=fast on
    // a processor that fuses, of the first ten all but step, impulse and uniform noise differ).
    const std::vector<std::uint64_t> expected = {
        0x066a71d5a003f628, 0xf09bbe56cf0a1948, 0xeb3d4026e7cf86f2, 0x06424749d6783837, 0x3058898002cff81b,
        0x02247f21b495f600, 0x0c8c8d47f389bce4, 0x66f73d53f15f2779, 0x7b38a9bb92aac378, 0x8db0e1e2c3374b50,
        0x7be5584d77374272, 0x2f32d5502755735f, 0x833dadf85cc5d328, 0x8f07a80bc459f5a8, 0x7f62e73fab830928,
        0x57a87aead37783a8, 0x3073e94b19162a28, 0xf5b0ed0843c56228, 0x97ce3efec0f84d28, 0xfcc5b7d9b2f9db32,
        0x3b8549e718a14014, 0x7e24dffa992aa647};
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
