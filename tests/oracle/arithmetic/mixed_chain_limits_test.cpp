// Limits of chains of all kinds, some of which change between whole words and float32 on the way.
#include <bit>
#include <cmath>

#include "oracle/arithmetic/error_bound.hpp"
#include "oracle/arithmetic/rail_watch.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/oracle/arithmetic/stimulus_words.hpp"
#include "tests/support/rounds.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

FilterStage random_stage(Random& random) {
    FilterStage stage = random_design(random, true);
    random_arithmetic(random, stage);
    if (chance(random, 60)) {
        StageArithmetic said;
        said.number = NumberKind::float32;
        said.rounding = stage.arithmetic.rounding;
        said.structure = stage.arithmetic.structure;
        said.division = stage.arithmetic.division;
        said.fused_multiply_add = chance(random, 50);
        said.summation = stage.arithmetic.summation;
        stage.arithmetic = said;
        if (chance(random, 60)) stage.coefficient_fraction_bits.reset();
    } else {
        stage.arithmetic.number = NumberKind::integer;
    }
    return stage;
}

struct MixedChain {
    SampleFormat in, out;
    FilterChain stages;
    DescribedChain described;
};

MixedChain random_mixed_chain(Random& random) {
    for (;;) {
        MixedChain made;
        made.in = *sample_format(one_of<std::string_view>(random, {"f32", "q15", "q31"}));
        made.out = *sample_format(one_of<std::string_view>(random, {"f32", "q15", "q31"}));
        const std::int64_t count = random.whole(2, 3);
        bool is_stable = true;
        for (std::int64_t i = 0; i < count; ++i) {
            FilterStage stage = random_stage(random);
            if (i + 1 < count) {
                stage.arithmetic.stage_format = *sample_format(one_of<std::string_view>(random, {"f32", "q15", "q31"}));
            }
            is_stable = is_stable && is_stable_as_stored(stage);
            made.stages.push_back(std::move(stage));
        }
        if (!is_stable) continue;
        auto described = describe(made.stages, made.in, made.out, 1.0);
        if (!described.described || described.described->missing || !make_twin(*described.described)) continue;
        made.described = std::move(*described.described);
        return made;
    }
}

/// Noise over the whole range, a square wave, or noise of some codes.
std::vector<Code> codes_of(std::int64_t kind, Random& random, const SampleFormat& format, std::size_t count) {
    std::vector<Code> codes(count);
    const std::int64_t run = random.whole(1, 60);
    for (std::size_t n = 0; n < count; ++n) {
        double value = random.ratio();
        if (kind == 1) value = (static_cast<std::int64_t>(n) / run) % 2 == 0 ? 0.999 : -0.999;
        if (kind == 2) value *= 1e-4;
        codes[n] = format.family == FormatFamily::f
                       ? std::bit_cast<Code>(static_cast<float>(value))
                       : static_cast<Code>(std::floor(std::ldexp(value, format.word_bits - 1)));
    }
    return codes;
}

std::string text_of(const MixedChain& chain) {
    std::string text(chain.in.name);
    for (const DescribedStage& stage : chain.described.stages) {
        text += "; " + stage.stage.kind + " " + std::string(name_of(stage.structure)) +
                (stage.number == NumberKind::float32 ? " float32" : " integer") + " to " +
                (stage.out.is_float ? "floats" : "words");
    }
    return text;
}

}  // namespace

TEST_CASE("mixed chains: no response leaves its limits where they claim to hold", "[arithmetic]") {
    Random random(805);
    INFO("seed 805");
    int limited = 0;
    std::int64_t claimed = 0;
    const int trials = test::rounds_of(500);
    for (int trial = 0; trial < trials; ++trial) {
        const MixedChain chain = random_mixed_chain(random);
        BoundUse use;
        use.samples = 500;
        const ErrorBound bound = derive(chain.described, use);
        if (std::isinf(bound.largest())) continue;
        ++limited;
        INFO("trial " << trial << ": " << text_of(chain));
        for (int run = 0; run < 3; ++run) {
            const auto codes = codes_of(random.whole(0, 2), random, chain.in, 500);
            RailWatch watch(chain.described);
            std::vector<std::uint8_t> exempt(codes.size());
            watch.add(values_of_codes(chain.described, codes), exempt);
            const auto errors = errors_of_codes(chain.described, codes);
            for (std::size_t n = 0; n < codes.size(); ++n) {
                if (exempt[n] != 0) continue;
                ++claimed;
                REQUIRE(errors[n] >= bound.lower);
                REQUIRE(errors[n] <= bound.upper);
            }
        }
    }
    CHECK(limited > trials * 4 / 5);
    CHECK(claimed > trials * 500);
}

TEST_CASE("mixed chains: rms and bias of noise stay within theirs, wherever the record begins", "[arithmetic]") {
    Random random(806);
    INFO("seed 806");
    constexpr std::size_t all = 3000;
    int statistical = 0, unclipped = 0;
    const int trials = test::rounds_of(600);
    for (int trial = 0; trial < trials; ++trial) {
        const MixedChain chain = random_mixed_chain(random);
        BoundUse use;
        use.has_past = chance(random, 50);
        use.samples = use.has_past ? random.whole(1, 100) : static_cast<std::int64_t>(all);
        use.noise_like = true;
        use.input_rms = 1.0 / std::sqrt(3.0);
        const ErrorBound bound = derive(chain.described, use);
        if (std::isinf(bound.largest())) continue;
        const auto codes = codes_of(0, random, chain.in, all);
        RailWatch watch(chain.described);
        std::vector<std::uint8_t> exempt(all);
        watch.add(values_of_codes(chain.described, codes), exempt);
        if (watch.first_unsafe_index()) continue;
        const auto errors = errors_of_codes(chain.described, codes);
        double sum = 0.0, squares = 0.0;
        for (std::size_t n = all - static_cast<std::size_t>(use.samples); n < all; ++n) {
            sum += errors[n];
            squares += errors[n] * errors[n];
        }
        const auto count = static_cast<double>(use.samples);
        const double rms = std::sqrt(squares / count), mean = sum / count;
        const bool clipped = watch.first_clip_index().has_value();
        INFO("trial " << trial << ": " << text_of(chain) << ", " << use.samples << " samples, rms " << rms << " of "
                      << bound.rms << ", bias " << mean << " of " << bound.bias_lower << " .. " << bound.bias_upper);
        REQUIRE(rms <= (clipped ? bound.worst_rms : bound.rms));
        REQUIRE(mean >= (clipped ? bound.clipped_bias_lower : bound.bias_lower));
        REQUIRE(mean <= (clipped ? bound.clipped_bias_upper : bound.bias_upper));
        statistical += bound.is_statistical;
        unclipped += !clipped;
    }
    if (test::draws_all_rounds()) CHECK(statistical > 0);
    CHECK(unclipped > trials / 3);
}

namespace {

/// The mean error of noise in `count` samples, in steps of the output, and the limits that it is told.
struct BiasOfNoise {
    double mean, lowest, highest;
};

BiasOfNoise bias_of_noise(const FilterStage& stage, std::string_view in, std::string_view out, std::size_t count) {
    Random random(807);
    const DescribedChain chain = *describe({stage}, *sample_format(in), *sample_format(out), 1.0).described;
    BoundUse use;
    use.samples = static_cast<std::int64_t>(count);
    use.noise_like = true;
    use.input_rms = 1.0 / std::sqrt(3.0);
    const ErrorBound bound = derive(chain, use);
    const auto codes = codes_of(0, random, *sample_format(in), count);
    double sum = 0.0;
    for (const double error : errors_of_codes(chain, codes)) sum += error;
    return {sum / static_cast<double>(count) / bound.step, bound.bias_lower / bound.step,
            bound.bias_upper / bound.step};
}

}  // namespace

TEST_CASE("mixed chains: a float mean of few whole numbers is cut off at few places", "[arithmetic]") {
    // Sums of 4 words leave remainders of 0, 1/4, 1/2 and 3/4: a floor is off by 3/8 in the mean, not by 1/2.
    FilterStage stage;
    stage.design = MovingAverage{4};
    stage.kind = "moving-average";
    stage.arithmetic.number = NumberKind::float32;
    stage.arithmetic.rounding = Rounding::floor;
    const BiasOfNoise bias = bias_of_noise(stage, "q15", "q15", 20000);
    CHECK(std::fabs(bias.mean + 0.375) < 0.01);
    CHECK(bias.lowest <= bias.mean);
    CHECK(bias.highest >= bias.mean);
}

TEST_CASE("mixed chains: states as coarse as the accumulator that they came from lose nothing again", "[arithmetic]") {
    FilterStage stage;
    stage.design = BiquadCascade{{{0.11, 0.23, 0.13, -0.3, 0.2}}};
    stage.kind = "biquad-cascade";
    stage.coefficient_fraction_bits = stage.arithmetic.coefficient_fraction_bits = 18;
    stage.arithmetic.structure = Structure::transposed_2;
    stage.arithmetic.rounding = Rounding::floor;
    stage.arithmetic.accumulator_fraction_bits = 21;
    stage.arithmetic.state_bits = 64;
    stage.arithmetic.state_fraction_bits = 31;
    const BiasOfNoise bias = bias_of_noise(stage, "q15", "q31", 20000);
    CHECK(bias.lowest <= bias.mean);
    CHECK(bias.highest >= bias.mean);
    CHECK(bias.highest - bias.lowest < 0.2 * std::fabs(bias.mean));
}
