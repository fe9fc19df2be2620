#include "oracle/arithmetic/cic_registers.hpp"

#include <algorithm>
#include <cmath>
#include <sstream>

#include "oracle/arithmetic/error_bound.hpp"
#include "oracle/arithmetic/limit_cycle.hpp"
#include "oracle/arithmetic/rail_watch.hpp"
#include "tests/oracle/arithmetic/twin_support.hpp"
#include "tests/published/csv_table.hpp"

using namespace halflsb;
using namespace halflsb::testing;
using Catch::Matchers::WithinRel;

namespace {

Given word(const char* name, const char* value) { return {name, std::string(value)}; }
Given number(const char* name, int value) { return {name, whole(value)}; }

/// Order 4, factor 25: Hogenauer's example, 16-bit samples in registers of 35 bits.
FilterStage hogenauer(std::vector<double> discarded, int state_bits = 35, const char* overflow = "wrap") {
    return promised_stage("cic-decimator", {number("order", 4), number("factor", 25), number("shift_bits", 19)},
                          {word("rounding", "floor"),
                           number("state_bits", state_bits),
                           word("state_overflow", overflow),
                           {"discarded_bits", std::move(discarded)}});
}

std::optional<ArithmeticProblem> problem_of(const FilterStage& stage) {
    return describe({stage}, *sample_format("i16"), *sample_format("i16"), 1.0).problem;
}

const std::vector<double> published{1, 6, 9, 13, 14, 15, 16, 17};

}  // namespace

// cic-bit-growth.csv: COMPUTED by Hogenauer's rule; of the first row (his example) the parameters are SEEN-2 and the
// discards agree with memory of the paper.
TEST_CASE("cic: discards by Hogenauer's rule are the published ones", "[arithmetic][published]") {
    const CsvTable table("cic-bit-growth.csv");
    for (std::size_t row = 0; row < table.rows(); ++row) {
        CicDecimator cic;
        cic.order = static_cast<int>(table.number(row, "stages N"));
        cic.factor = static_cast<int>(table.number(row, "rate change R"));
        cic.delay_samples = static_cast<int>(table.number(row, "differential delay M"));
        std::istringstream numbers(table.text(row, "LSBs discardable before stage"));
        std::vector<int> expected;
        for (int bits = 0; numbers >> bits;) expected.push_back(bits);
        REQUIRE(static_cast<int>(expected.size()) == 2 * cic.order + 1);
        const double output_lsb = std::ldexp(1.0, expected.back());
        expected.pop_back();
        INFO("row " << row);
        CHECK(hogenauer_discards(cic, output_lsb) == expected);
    }
}

// The published widths of the same row: 34 29 26 22 21 20 19 18.
TEST_CASE("cic: each register is as much narrower as it discards", "[arithmetic][published]") {
    const auto chain = described_chain({hogenauer(published)}, "i16", "i16");
    std::vector<int> widths, needed;
    for (const CicRegister& each : cic_registers(chain.stages.front())) {
        widths.push_back(each.word.bits);
        needed.push_back(each.bits_needed);
        CHECK(each.word.fraction_bits == -each.discarded_bits);
    }
    CHECK(widths == std::vector<int>{34, 29, 26, 22, 21, 20, 19, 18});
    CHECK(needed == widths);
}

TEST_CASE("cic: with a gain that is a power of two, what is discarded can need one bit more", "[arithmetic]") {
    const auto stage = [](std::vector<double> discarded) {
        return promised_stage("cic-decimator", {number("order", 3), number("factor", 8), number("shift_bits", 9)},
                              {word("rounding", "floor"), {"discarded_bits", std::move(discarded)}});
    };
    const auto needed = [&](std::vector<double> discarded) {
        return cic_registers(described_chain({stage(std::move(discarded))}).stages.front()).front().bits_needed;
    };
    CHECK(needed({0, 0, 0, 0, 0, 0}) == 25);
    CHECK(needed({0, 0, 0, 0, 0, 1}) == 26);
}

TEST_CASE("cic: a decimator that discards returns what firmware does in registers of 32 bits with zeros below",
          "[twin]") {
    // The firmware keeps every register at the top of its word and masks what it discards.
    const int order = 2, factor = 5, delay = 2, width = 16 + 7;
    const std::vector<double> discarded{2, 3, 3, 5};
    const auto stage = promised_stage(
        "cic-decimator",
        {number("order", order), number("factor", factor), number("delay_samples", delay), number("shift_bits", 6)},
        {word("rounding", "floor"), number("state_bits", width), {"discarded_bits", discarded}});
    const Codes in = telling_codes();
    const auto kept = [&](std::size_t j, std::uint32_t value) {
        return value & ~((std::uint32_t{1} << (32 - width + static_cast<int>(discarded[j]))) - 1U);
    };
    std::uint32_t first = 0, second = 0, past[2][delay] = {};
    Codes board;
    for (std::size_t n = 0; n < in.size(); ++n) {
        first += kept(0, static_cast<std::uint32_t>(in[n]) << (32 - width));
        second += kept(1, first);
        if (n % factor != 0) continue;
        std::uint32_t value = second;
        for (std::size_t k = 0; k < 2; ++k) {
            value = kept(2 + k, value);
            const std::uint32_t oldest = past[k][delay - 1];
            past[k][1] = past[k][0];
            past[k][0] = value;
            value -= oldest;
        }
        const auto y = static_cast<std::int32_t>(value) >> (32 - width + 6);
        board.push_back(std::clamp(y, -32768, 32767));
    }
    CHECK(run(*twin_of({stage}), in) == board);
}

TEST_CASE("cic: a state with discards is carried over, one beyond a narrow register is none", "[twin]") {
    const auto twin = twin_of({hogenauer(published)}, "i16", "i16"),
               other = twin_of({hogenauer(published)}, "i16", "i16");
    run(*twin, noise_codes(1010, 5));
    auto state = twin->state();
    REQUIRE(other->set_state(state));
    CHECK(run(*twin, noise_codes(500, 6)) == run(*other, noise_codes(500, 6)));
    state[3] = std::int64_t{1} << 21;  // integrator 4 has 22 bits
    CHECK_FALSE(other->set_state(state));
}

TEST_CASE("cic: discards are refused at both sides of each limit", "[arithmetic]") {
    CHECK_FALSE(problem_of(hogenauer(published)));
    const std::vector<std::vector<double>> all_wrong{{1, 6, 9, 13, 14, 15, 16},
                                                     {1, 6, 9, 13, 14, 15, 16, 17, 19},
                                                     {1, 6, 9, 13, 12, 15, 16, 17},
                                                     {1, 6, 9, 13, 14, 15, 16, 34}};
    for (const auto& wrong : all_wrong) {
        const auto problem = problem_of(hogenauer(wrong));
        REQUIRE(problem);
        CHECK(problem->error.place == "discarded_bits");
    }
    CHECK_FALSE(problem_of(hogenauer({1, 6, 9, 13, 14, 15, 16, 33})));
    CHECK_FALSE(problem_of(hogenauer({1, 6, 9, 13, 14, 15, 16, 34}, 36)));
    CHECK(problem_of(hogenauer(published, 34))->error.place == "state_bits");
}

TEST_CASE("cic: every register that discards is a point of the error bound, by its own path", "[arithmetic]") {
    const auto chain = described_chain({hogenauer(published)}, "i16", "i16");
    const ErrorBound bound = derive(chain);
    REQUIRE(bound.terms.size() == 9);
    CHECK(bound.terms[3].name == "stage 1, integrator 4");
    CHECK(bound.terms[3].step == 8192.0);
    // What is discarded at the last integrator passes one moving sum of 25 and three differences.
    CHECK_THAT(bound.terms[3].l1, WithinRel(25.0 * 8.0 / 524288.0, 1e-9));
}

TEST_CASE("cic: what was discarded may go round when the input has ended, within what is proven", "[arithmetic]") {
    const auto chain = described_chain({hogenauer(published)}, "i16", "i16");
    const SilenceBound bound = silence_bound(chain);
    CHECK_FALSE(bound.is_silent());
    CHECK(silence_bound(described_chain({hogenauer({0, 0, 0, 0, 0, 0, 0, 0})}, "i16", "i16")).is_silent());
    bool remains = false;
    for (std::uint64_t seed = 0; seed < 20; ++seed) {
        const auto twin = make_twin(chain);
        run(*twin, noise_codes(1003, seed));
        run(*twin, Codes(200, 0));
        for (const Code code : run(*twin, Codes(5000, 0))) {
            REQUIRE((code >= bound.lowest_code && code <= bound.highest_code));
            remains = remains || code != 0;
        }
    }
    CHECK(remains);
}

TEST_CASE("cic: a last comb that discards can make it wrap is watched, one with room is not", "[arithmetic]") {
    const auto watched = [](int state_bits) {
        const auto stage =
            promised_stage("cic-decimator", {number("order", 3), number("factor", 8), number("shift_bits", 9)},
                           {word("rounding", "floor"),
                            number("state_bits", state_bits),
                            {"discarded_bits", std::vector<double>{0, 3, 4, 5, 6, 7}}});
        const RailWatch watch(described_chain({stage}));
        for (const RailNode& node : watch.nodes()) {
            if (node.name == "stage 1, comb 3") return node.is_watched;
        }
        FAIL("no node");
        return false;
    };
    CHECK(watched(25));
    CHECK_FALSE(watched(26));
}
