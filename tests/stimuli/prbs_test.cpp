// PRBS: what the Recommendation states of each sequence. tests/reference/stimuli_test.py steps a register
// bit by bit beside it.
#include <algorithm>
#include <set>

#include "make.hpp"

using namespace halflsb;

namespace {

constexpr std::int64_t longest = 10'000'000'000;

std::unique_ptr<const Stimulus> prbs(std::int64_t order, std::int64_t length = longest) {
    return made("prbs", {{"length_samples", length}, {"order", order}, {"level_ratio", 0.25}});
}

std::vector<bool> bits_of(const Stimulus& stimulus, std::int64_t first, std::size_t count) {
    std::vector<bool> bits;
    for (const double ratio : ratios_of(stimulus, first, count)) {
        REQUIRE(std::abs(ratio) == 0.25);
        bits.push_back(ratio > 0.0);
    }
    return bits;
}

std::size_t longest_run(const std::vector<bool>& bits, bool of) {
    std::size_t best = 0, run = 0;
    for (const bool bit : bits) best = std::max(best, run = bit == of ? run + 1 : 0);
    return best;
}

}  // namespace

TEST_CASE("prbs: period, balance and longest runs are those of ITU-T O.150", "[stimuli]") {
    // SEEN quoted in secondary literature on O.150 (05/96), table 1: longest run of zeros 8, 10, 15, 19.
    struct Row {
        int order;
        std::size_t zeros, ones;
    };
    for (const Row& row : {Row{9, 8, 9}, Row{11, 10, 11}, Row{15, 15, 14}, Row{20, 19, 20}}) {
        INFO(row.order);
        const std::size_t period = (std::size_t{1} << row.order) - 1;
        const auto stimulus = prbs(row.order);
        // A period and a bit, so that the run over its end counts.
        const auto bits = bits_of(*stimulus, 0, period + 64);
        CHECK(std::equal(bits.begin(), bits.begin() + 64, bits.end() - 64));
        CHECK(longest_run(bits, false) == row.zeros);
        CHECK(longest_run(bits, true) == row.ones);
        const auto ones = std::count(bits.begin(), bits.begin() + static_cast<std::ptrdiff_t>(period), true);
        CHECK(static_cast<std::size_t>(ones) == (row.ones > row.zeros ? period / 2 + 1 : period / 2));
    }
}

TEST_CASE("prbs: every word of 9 bits but one stands once in a period of order 9", "[stimuli]") {
    const auto bits = bits_of(*prbs(9), 0, 511 + 8);
    std::set<unsigned> words;
    for (std::size_t i = 0; i < 511; ++i) {
        unsigned word = 0;
        for (std::size_t k = 0; k < 9; ++k) word = word << 1 | (bits[i + k] ? 1U : 0U);
        words.insert(word);
    }
    CHECK(words.size() == 511);
    CHECK(words.count(0) == 0);
}

TEST_CASE("prbs: the 511-bit pattern begins with the first of nine ones", "[stimuli]") {
    // SEEN quoted from O.150, 5.1: "begins with the first ONE of 9 consecutive ONEs"; then a[n] = a[n-5] ^ a[n-9].
    auto bits = bits_of(*prbs(9), 0, 511);
    CHECK(std::all_of(bits.begin(), bits.begin() + 9, [](bool bit) { return bit; }));
    CHECK_FALSE(bits[9]);
    for (std::size_t n = 9; n < 511; ++n) REQUIRE(bits[n] == (bits[n - 5] != bits[n - 9]));
}

TEST_CASE("prbs: each polynomial holds anywhere, whatever the index", "[stimuli]") {
    struct Row {
        std::size_t order, tap;
        bool inverted;
    };
    for (const Row& row : {Row{9, 5, false}, Row{11, 9, false}, Row{15, 14, true}, Row{20, 3, false}, Row{23, 18, true},
                           Row{31, 28, true}}) {
        INFO(row.order);
        const auto stimulus = prbs(static_cast<std::int64_t>(row.order));
        const auto period = (std::int64_t{1} << row.order) - 1;
        for (const std::int64_t first : {std::int64_t{0}, std::int64_t{123'456'789}, period - 100, longest - 1000}) {
            const auto bits = bits_of(*stimulus, first, 1000);
            for (std::size_t n = row.order; n < bits.size(); ++n) {
                // Inverted on both sides of the sum: the three inversions leave one.
                REQUIRE(bits[n] == ((bits[n - row.tap] != bits[n - row.order]) != row.inverted));
            }
        }
        CHECK(bits_of(*stimulus, 0, 200) == bits_of(*stimulus, period, 200));
        CHECK(bits_of(*stimulus, 0, row.order) == std::vector<bool>(row.order, !row.inverted));
    }
}

TEST_CASE("prbs: a register seed starts elsewhere in the same sequence", "[stimuli]") {
    const auto seeded = [](std::int64_t seed) {
        return made("prbs", {{"length_samples", std::int64_t{1000}},
                             {"order", std::int64_t{9}},
                             {"register_seed", seed},
                             {"level_ratio", 0.25}});
    };
    // Stage 9, the highest bit, comes first.
    const auto bits = bits_of(*seeded(0x155), 0, 9);
    CHECK(bits == std::vector<bool>{true, false, true, false, true, false, true, false, true});
    CHECK(ratios_of(*seeded(511), 0, 600) == ratios_of(*prbs(9, 1000), 0, 600));
}

TEST_CASE("prbs: its power is continuous until the lines of its period are resolved", "[stimuli]") {
    CHECK(prbs(15)->spectrum().tones.empty());
    REQUIRE(prbs(15)->spectrum().bands.size() == 1);
    CHECK(prbs(15)->spectrum().bands[0].to_cycles_per_sample == 0.5);
    CHECK(prbs(9, 8 * 511 - 1)->spectrum().tones.empty());
    const Spectrum lines = prbs(9, 8 * 511)->spectrum();
    CHECK(lines.bands.empty());
    REQUIRE(lines.tones.size() == 255);
    CHECK(lines.tones.front() == 1.0 / 511.0);
    CHECK(lines.tones.back() == 255.0 / 511.0);
    CHECK(prbs(11, 8 * 2047)->spectrum().tones.size() == 1023);
}

TEST_CASE("prbs: orders and registers that are none are refused", "[stimuli]") {
    const std::int64_t ten = 10;
    CHECK(refusal("prbs", {{"length_samples", ten}, {"order", std::int64_t{10}}}) ==
          "order: 10 is not an order of ITU-T O.150\n  give 9, 11, 15, 20, 23 or 31");
    CHECK(refusal("prbs", {{"length_samples", ten}, {"order", std::int64_t{32}}}) ==
          "order: 32 is above the largest, 31\n  give 31 or less");
    CHECK(refusal("prbs", {{"length_samples", ten}, {"register_seed", std::int64_t{0}}}) ==
          "register_seed: 0 is below the least, 1\n  give 1 or more");
    CHECK(
        refusal("prbs", {{"length_samples", ten}, {"order", std::int64_t{9}}, {"register_seed", std::int64_t{512}}}) ==
        "register_seed: 512 needs more than the 9 stages of the register\n  give a whole number from 1 to 511");
    CHECK(
        refusal("prbs", {{"length_samples", ten}, {"order", std::int64_t{9}}, {"register_seed", std::int64_t{511}}}) ==
        "accepted");
}
