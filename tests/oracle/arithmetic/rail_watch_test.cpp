#include "oracle/arithmetic/rail_watch.hpp"

#include <algorithm>
#include <cstdio>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/arithmetic/error_bound.hpp"
#include "oracle/arithmetic/twin.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/oracle/arithmetic/stimulus_words.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

struct Judged {
    std::int64_t claimed = 0, exempt = 0, beyond = 0;
    std::optional<std::int64_t> lost, clipped;
    bool saturated = false, wrapped = false;  ///< a word of the twin did
    std::string first_beyond;
};

/// A twin against the declared reference, where the limits claim to hold.
Judged judged(const DescribedChain& chain, Twin& twin, std::vector<Code> words) {
    Judged result;
    const ErrorBound bound = derive(chain);
    RailWatch watch(chain);
    const auto values = values_of_words(chain, words);
    std::vector<std::uint8_t> exempt(words.size());
    watch.add(values, exempt);
    const auto reference = run(*make_declared_filter(chain, 1.0), values);
    for (Code& word : words) word = static_cast<Code>(word + chain.stages.front().in.zero_code);
    std::vector<Code> returned(words.size());
    std::vector<double> response(words.size());
    twin.reset();
    twin.process(words, returned);
    values_at(chain.stages.back().out, returned, response);
    for (std::size_t n = 0; n < words.size(); ++n) {
        if (exempt[n] != 0) {
            ++result.exempt;
            continue;
        }
        ++result.claimed;
        const double error = response[n] - reference[n];
        if (error >= bound.lower && error <= bound.upper) continue;
        if (result.beyond++ == 0) {
            result.first_beyond = "sample " + std::to_string(n) + ": " + std::to_string(response[n] / bound.step) +
                                  " against " + std::to_string(reference[n] / bound.step) + ", limits " +
                                  std::to_string(bound.lower / bound.step) + " .. " +
                                  std::to_string(bound.upper / bound.step);
        }
    }
    result.lost = watch.lost_from();
    result.clipped = watch.first_clip_index();
    for (const NodeReach& node : twin.reaches()) {
        if (node.overflows == 0) continue;
        (node.word.overflow == Overflow::wrap ? result.wrapped : result.saturated) = true;
    }
    return result;
}

struct Totals {
    std::int64_t chains = 0;                     ///< judged: something was claimed of each
    std::int64_t saturated = 0, wrapped = 0;     ///< of these: chains whose twin did, at some word
    std::int64_t no_twin = 0, nothing_said = 0;  ///< drawn besides
    std::int64_t claimed = 0, exempt = 0;        ///< samples
    std::int64_t clipped = 0, lost = 0;          ///< runs
};

/// Draws until `chains` have been judged.
Totals over_random_chains(std::uint64_t seed, std::int64_t chains) {
    Random random(seed);
    INFO("seed " << seed);
    Totals totals;
    for (std::int64_t trial = 0; totals.chains < chains; ++trial) {
        REQUIRE(trial < 2 * chains);
        const RandomChain chain = random_narrow_chain(random);
        const auto twin = make_twin(chain.described);
        if (twin == nullptr) {
            ++totals.no_twin;
            continue;
        }
        INFO("trial " << trial << ": " << text_of(chain));
        std::int64_t claimed = 0;
        bool saturated = false, wrapped = false;
        for (int run = 0; run < 2; ++run) {
            const Judged found = judged(chain.described, *twin, hard_words(random, chain.described, 300));
            INFO(found.first_beyond);
            REQUIRE(found.beyond == 0);
            claimed += found.claimed;
            saturated = saturated || found.saturated;
            wrapped = wrapped || found.wrapped;
            totals.exempt += found.exempt;
            totals.clipped += found.clipped.has_value();
            totals.lost += found.lost.has_value();
        }
        totals.claimed += claimed;
        if (claimed == 0) {
            ++totals.nothing_said;
            continue;
        }
        ++totals.chains;
        totals.saturated += saturated;
        totals.wrapped += wrapped;
    }
    return totals;
}

}  // namespace

TEST_CASE("rail watch: no twin exceeds its limits where they claim to hold", "[arithmetic]") {
    const Totals totals = over_random_chains(501, 400);
    // All of it must have happened: a watch that exempts everything would pass, too.
    CHECK(totals.chains == 400);
    CHECK(totals.saturated > 60);
    CHECK(totals.wrapped > 30);
    CHECK(totals.claimed > 80000);
    CHECK(totals.exempt > 10000);
    CHECK(totals.clipped > 100);
    CHECK(totals.lost > 50);
}

TEST_CASE("rail watch: nor does one of 10,000", "[arithmetic][.long]") {
    const Totals totals = over_random_chains(502, 10000);
    // A row of the long run's table; without it the table misses its figure.
    std::printf(
        "random filters whose twins stay within derived limits wherever these claim to hold | 10,000 of 10,000 | "
        "%lld judged, none beyond; of %lld a word saturated, of %lld one wrapped; %lld samples claimed, %lld exempt; "
        "%lld without a twin and %lld without a claim drawn besides; seed 502\n",
        static_cast<long long>(totals.chains), static_cast<long long>(totals.saturated),
        static_cast<long long>(totals.wrapped), static_cast<long long>(totals.claimed),
        static_cast<long long>(totals.exempt), static_cast<long long>(totals.no_twin),
        static_cast<long long>(totals.nothing_said));
    CHECK(totals.chains == 10000);
    CHECK(totals.saturated > 2000);
    CHECK(totals.wrapped > 900);
    CHECK(totals.claimed > 2000000);
}

namespace {

DescribedChain q15_chain(const FilterChain& stages) {
    return *describe(stages, *sample_format("q15"), *sample_format("q15"), 1.0).described;
}

FilterStage in_words(FilterDesign design, int bits, Overflow overflow, std::string kind) {
    FilterStage stage;
    stage.design = std::move(design);
    stage.coefficient_fraction_bits = bits;
    stage.kind = std::move(kind);
    stage.arithmetic.rounding = Rounding::half_up;
    stage.arithmetic.output_overflow = overflow;
    stage.arithmetic.accumulator_bits = 64;
    return stage;
}

std::vector<std::uint8_t> watched(RailWatch& watch, const std::vector<double>& values, Split split = Split::whole) {
    std::vector<std::uint8_t> exempt(values.size());
    for_blocks(split, values.size(), [&](std::size_t first, std::size_t count) {
        watch.add(std::span(values).subspan(first, count), std::span(exempt).subspan(first, count));
    });
    return exempt;
}

std::int64_t count_of(const std::vector<std::uint8_t>& exempt) { return std::count(exempt.begin(), exempt.end(), 1); }

}  // namespace

TEST_CASE("rail watch: an output that saturates is a clip, both sides of the rail", "[arithmetic]") {
    RailWatch watch(q15_chain({in_words(Fir{{0.75, 0.75}}, 14, Overflow::saturate, "fir")}));
    // 0.75 (a + b) + half an LSB against 1 - 1 LSB.
    const double q = 0x1p-15, most = (1.0 - 1.5 * q) / 0.75;
    std::vector<double> values{0.5, most - 0.5 - q, 0.1};
    CHECK(count_of(watched(watch, values)) == 0);
    CHECK_FALSE(watch.first_clip_index());
    watch.reset();
    values[1] += 3.0 * q;
    CHECK(count_of(watched(watch, values)) == 0);
    CHECK(watch.first_clip_index() == 1);
    CHECK_FALSE(watch.first_unsafe_index());
}

TEST_CASE("rail watch: an output that wraps exempts the samples that wrap, and no others", "[arithmetic]") {
    RailWatch watch(q15_chain({in_words(Fir{{0.75, 0.75}}, 14, Overflow::wrap, "fir")}));
    const std::vector<double> values{0.5, 0.9, 0.9, 0.1, -0.9, -0.9, 0.0};
    CHECK(watched(watch, values) == std::vector<std::uint8_t>{0, 1, 1, 0, 0, 1, 0});
    CHECK(watch.first_unsafe_index() == 1);
    CHECK(watch.unsafe_node() == "stage 1, output");
    CHECK_FALSE(watch.lost_from());
}

TEST_CASE("rail watch: behind a wrap a fir remembers as long as its taps, a recursion for ever", "[arithmetic]") {
    FilterStage first = in_words(Fir{{1.5}}, 14, Overflow::wrap, "fir");
    first.arithmetic.stage_format = sample_format("q15");
    std::vector<double> values(12, 0.1);
    values[3] = 0.9;
    RailWatch fir(q15_chain({first, in_words(Fir{{0.25, 0.25, 0.25}}, 14, Overflow::saturate, "fir")}));
    CHECK(watched(fir, values) == std::vector<std::uint8_t>{0, 0, 0, 1, 1, 1, 0, 0, 0, 0, 0, 0});
    RailWatch recursion(q15_chain({first, in_words(Comb{1, 0.25, 0.0, -0.5}, 14, Overflow::saturate, "comb")}));
    CHECK(count_of(watched(recursion, values)) == 9);
    CHECK(recursion.lost_from() == 3);
    CHECK(recursion.unsafe_node() == "stage 1, output");
}

TEST_CASE("rail watch: a state that saturates is lost, of first order alone it is a clip", "[arithmetic]") {
    std::vector<double> values(40, 0.9);
    RailWatch second(
        q15_chain({in_words(BiquadCascade{{{1.0, 0.0, 0.0, -1.0, 0.5}}}, 14, Overflow::saturate, "biquad-cascade")}));
    // 0.9, then 1.8: the second sample is beyond the rail.
    CHECK(count_of(watched(second, values)) == 39);
    CHECK(second.lost_from() == 1);
    CHECK(second.unsafe_node() == "stage 1, section 1, state");
    RailWatch first(
        q15_chain({in_words(BiquadCascade{{{1.0, 0.0, 0.0, -0.75, 0.0}}}, 14, Overflow::saturate, "biquad-cascade")}));
    CHECK(count_of(watched(first, values)) == 0);
    CHECK(first.first_clip_index() == 1);
    // Where something has erred before, clipping could make more of it.
    FilterStage before = in_words(Fir{{0.9}}, 14, Overflow::saturate, "fir");
    before.arithmetic.stage_format = sample_format("q15");
    RailWatch behind(q15_chain(
        {before, in_words(BiquadCascade{{{1.0, 0.0, 0.0, -0.75, 0.0}}}, 14, Overflow::saturate, "biquad-cascade")}));
    watched(behind, values);
    CHECK(behind.lost_from() == 1);
}

TEST_CASE("rail watch: an accumulator that wraps is judged by its end, one that saturates by the way", "[arithmetic]") {
    // 30 bits, 29 of them fraction: its ends are -1 and 1. The way goes to 1.35 and back to 0.45.
    FilterStage stage = in_words(Fir{{0.75, 0.75, -1.0}}, 14, Overflow::saturate, "fir");
    stage.arithmetic.accumulator_bits = 30;
    const std::vector<double> values{0.1, 0.1, 0.1, 0.9, 0.9, 0.9, 0.1};
    RailWatch wraps(q15_chain({stage}));
    CHECK(watched(wraps, values) == std::vector<std::uint8_t>{0, 0, 0, 0, 1, 0, 0});
    stage.arithmetic.accumulator_overflow = Overflow::saturate;
    RailWatch saturates(q15_chain({stage}));
    CHECK(watched(saturates, values) == std::vector<std::uint8_t>{0, 0, 0, 0, 1, 1, 0});
    CHECK(saturates.unsafe_node() == "stage 1, accumulator");
}

TEST_CASE("rail watch: nodes that no input can fill are not watched, and are listed with their headroom",
          "[arithmetic]") {
    RailWatch watch(q15_chain({in_words(Fir{{0.25, 0.25}}, 14, Overflow::saturate, "fir")}));
    REQUIRE(watch.nodes().size() == 2);
    for (const RailNode& node : watch.nodes()) {
        CHECK_FALSE(node.is_watched);
        CHECK(node.worst_case == 0.5);
    }
    CHECK(watch.nodes()[0].name == "stage 1, accumulator");
    CHECK(watch.nodes()[1].name == "stage 1, output");
    CHECK(watch.nodes()[1].error == 0x1p-16);
}

TEST_CASE("rail watch: any split into blocks gives the same answers", "[arithmetic]") {
    Random random(503);
    INFO("seed 503");
    for (int trial = 0; trial < 40; ++trial) {
        const RandomChain chain = random_narrow_chain(random);
        INFO(text_of(chain));
        RailWatch watch(chain.described);
        const auto values = values_of_words(chain.described, hard_words(random, chain.described, 700));
        const auto whole = watched(watch, values);
        const auto unsafe = watch.first_unsafe_index(), lost = watch.lost_from(), clip = watch.first_clip_index();
        for (const Split split : every_split) {
            watch.reset();
            REQUIRE(watched(watch, values, split) == whole);
            CHECK(watch.first_unsafe_index() == unsafe);
            CHECK(watch.lost_from() == lost);
            CHECK(watch.first_clip_index() == clip);
        }
    }
}

TEST_CASE("declared: a loop of first order feeds back what it has clipped", "[arithmetic]") {
    const DescribedChain chain =
        q15_chain({in_words(BiquadCascade{{{1.0, 0.0, 0.0, -0.75, 0.0}}}, 14, Overflow::saturate, "biquad-cascade")});
    const double top = 1.0 - 0x1p-15;
    const auto filter = make_declared_filter(chain, 2.0);
    const auto returned = run(*filter, std::vector<double>{0.5, 0.75, 0.75, 0.0, 0.0});
    CHECK(returned == std::vector<double>{1.0, 2.0 * top, 2.0 * top, 1.5 * top, 1.125 * top});
    // Of second order it does not: its state runs on, its output clips.
    const DescribedChain second =
        q15_chain({in_words(BiquadCascade{{{1.0, 0.0, 0.0, -0.75, 0.25}}}, 14, Overflow::saturate, "biquad-cascade")});
    CHECK(run(*make_declared_filter(second, 1.0), std::vector<double>{0.75, 0.75, 0.0}) ==
          std::vector<double>{0.75, top, 0.796875});
}
