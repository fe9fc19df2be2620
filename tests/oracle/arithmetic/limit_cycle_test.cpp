#include "oracle/arithmetic/limit_cycle.hpp"

#include <cstdlib>

#include "oracle/arithmetic/twin.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/oracle/arithmetic/stimulus_words.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

double fraction_of(const std::string& text) {
    const std::size_t slash = text.find('/');
    const double above = std::stod(text.substr(0, slash));
    return slash == std::string::npos ? above : above / std::stod(text.substr(slash + 1));
}

/// y[n] = a1 y[n-1] + a2 y[n-2] + x[n] in whole numbers, coefficients of 2^-40.
DescribedChain recursion(double a1, double a2, Rounding rounding, RoundingAt at = RoundingAt::sum) {
    StageArithmetic said;
    said.rounding = rounding;
    said.rounding_at = at;
    said.accumulator_bits = 64;
    FilterStage stage;
    stage.design = BiquadCascade{{{1.0, 0.0, 0.0, -a1, -a2}}};
    stage.coefficient_fraction_bits = 40;
    stage.arithmetic = said;
    stage.kind = "biquad-cascade";
    return *describe({stage}, *sample_format("i16"), *sample_format("i16"), 1.0).described;
}

}  // namespace

// dead-band-first-order.csv: bound MEMORY (Jackson), values COMPUTED by exhaustive search with exact fractions. The
// coefficients that are no binary fractions are stored to 2^-40 here: the same cycles, as 0.5 / (1 - a) moves by 1e-9.
TEST_CASE("limit cycle: the proven bound of first order is the published dead band", "[arithmetic][published]") {
    const CsvTable table("dead-band-first-order.csv");
    int exact = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double a = fraction_of(table.text(row, "coefficient a"));
        const auto largest = static_cast<std::int64_t>(std::stod(table.text(row, "floor of bound")));
        const auto found = std::llabs(std::stoll(table.text(row, "brute-force largest")));
        INFO("a = " << a);
        const SilenceBound bound = silence_bound(recursion(a, 0.0, Rounding::half_away), 1 << 20);
        CHECK(bound.highest_code >= found);
        CHECK(bound.highest_code == largest);
        CHECK(bound.lowest_code == -largest);
        REQUIRE(bound.estimates.size() == 1);
        CHECK(bound.estimates[0].oscillation == largest);
        REQUIRE(bound.searched);
        CHECK(bound.searched->highest <= found);
        // Coefficients that are stored exactly reach it.
        if (std::fmod(a * 1024.0, 1.0) == 0.0) {
            CHECK(bound.searched->highest == found);
            ++exact;
        }
        const auto floored = static_cast<std::int64_t>(std::stod(table.text(row, "same, two's-complement")));
        const SilenceBound truncating = silence_bound(recursion(a, 0.0, Rounding::floor), 1 << 20);
        CHECK(truncating.lowest_code <= floored);
        REQUIRE(truncating.searched);
        if (std::fmod(a * 1024.0, 1.0) == 0.0) CHECK(truncating.searched->lowest == floored);
        CHECK(truncating.searched->highest == 0);
        const SilenceBound magnitude = silence_bound(recursion(a, 0.0, Rounding::toward_zero), 1 << 20);
        REQUIRE(magnitude.searched);
        CHECK((magnitude.searched->lowest == 0 && magnitude.searched->highest == 0));
    }
    CHECK(exact >= 8);
}

// dead-band-second-order.csv: estimate MEMORY (Jackson), values COMPUTED by exhaustive search with exact fractions. The
// estimate is exceeded in some of its rows: it is no bound.
TEST_CASE("limit cycle: no published cycle of second order exceeds the proven bound", "[arithmetic][published]") {
    const CsvTable table("dead-band-second-order.csv");
    int estimate_exceeded = 0;
    for (std::size_t row = 0; row < table.rows(); ++row) {
        const double a1 = fraction_of(table.text(row, "a1")), a2 = fraction_of(table.text(row, "a2"));
        const auto products = std::stoll(table.text(row, "brute force max |y| on a cycle"));
        const auto sum = std::stoll(table.text(row, "brute force max |y|, single"));
        INFO("a1 = " << a1 << ", a2 = " << a2);
        const SilenceBound each = silence_bound(recursion(a1, a2, Rounding::half_away, RoundingAt::product));
        const SilenceBound once = silence_bound(recursion(a1, a2, Rounding::half_away));
        CHECK(each.highest_code >= products);
        CHECK(once.highest_code >= sum);
        CHECK(each.highest_code >= once.highest_code);
        REQUIRE(once.estimates.size() == 1);
        CHECK(once.estimates[0].oscillation == std::stoll(table.text(row, "Jackson effective-value")));
        estimate_exceeded += sum > std::max(once.estimates[0].oscillation, once.estimates[0].constant);
        if (once.searched) CHECK(once.searched->highest <= once.highest_code);
    }
    CHECK(estimate_exceeded > 0);
}

TEST_CASE("limit cycle: a filter without feedback is silent behind its memory", "[arithmetic]") {
    FilterStage stage;
    stage.design = Fir{{0.3, 0.4, -0.1}};
    stage.coefficient_fraction_bits = 12;
    stage.arithmetic.rounding = Rounding::floor;
    stage.kind = "fir";
    const SilenceBound bound =
        silence_bound(*describe({stage}, *sample_format("q15"), *sample_format("q15"), 1.0).described);
    CHECK((bound.lower == 0.0 && bound.upper == 0.0 && bound.is_silent()));
    CHECK(bound.estimates.empty());
}

TEST_CASE("limit cycle: twins that fall silent stay within the bound", "[arithmetic]") {
    Random random(701);
    INFO("seed 701");
    int sounding = 0;
    for (int trial = 0; trial < 300; ++trial) {
        const RandomChain chain = random_chain(random);
        if (!make_twin(chain.described)) continue;
        INFO("trial " << trial << ": " << text_of(chain));
        // Small, so that nothing overflows; silent for as long as the slowest pole needs, 0.998^9000 = 1e-8.
        std::vector<Code> words(9400, 0);
        for (std::size_t n = 0; n < 60; ++n) words[n] = static_cast<Code>(random.whole(-5, 5));
        const auto values = twin_values(chain.described, words);
        const SilenceBound bound = silence_bound(chain.described, 0);
        for (std::size_t n = 9100; n < words.size(); ++n) {
            REQUIRE(values[n] >= static_cast<double>(bound.lowest_code) * bound.step);
            REQUIRE(values[n] <= static_cast<double>(bound.highest_code) * bound.step);
        }
        sounding += values.back() != 0.0;
    }
    CHECK(sounding > 20);
}

// Transposed, each product shortened: the state has 17 fraction bits, the output none, and what the state loses there
// comes back for ever. Boards 4011 and 4264 of the right ones, that were to be silent.
TEST_CASE("limit cycle: a state that is shortened on its way to the output is not silent", "[arithmetic]") {
    StageArithmetic said;
    said.rounding_at = RoundingAt::product;
    said.structure = Structure::transposed_2;
    said.state_bits = 64;
    const auto bound_and_last = [&](const BiquadSection& section, Rounding rounding, int state_bits,
                                    std::string_view format) {
        said.rounding = rounding;
        said.state_fraction_bits = state_bits;
        FilterStage stage{BiquadCascade{{section}}, 15, said, "biquad-cascade", {}};
        const DescribedChain chain = *describe({stage}, *sample_format(format), *sample_format(format), 1.0).described;
        std::vector<Code> words(2000, 0);
        words[0] = 100;
        return std::pair(silence_bound(chain, 0), twin_values(chain, words).back());
    };
    const auto [stands, last] =
        bound_and_last({-0.500701904296875, 0.163879394531250, -0.310546875, -1.316864013671875, 0.636077880859375},
                       Rounding::half_up, 17, "i16");
    CHECK(last != 0.0);
    CHECK((stands.lower <= last && stands.upper >= last));
    // One error of -1 .. 0 through 1 / (1 + 0.25 z^-1): 16/15 and -4/15, and the states' steps of 2^-34 are nothing.
    const SilenceBound floored =
        bound_and_last({-0.96875, -0.3828125, 0.0, 0.25, 0.0}, Rounding::floor, 34, "q7").first;
    CHECK_THAT(floored.lower / floored.step, Catch::WithinAbs(-16.0 / 15.0, 1e-6));
    CHECK_THAT(floored.upper / floored.step, Catch::WithinAbs(4.0 / 15.0, 1e-6));
    CHECK(floored.lowest_code == -1);
}
