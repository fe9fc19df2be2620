// Limits of chains that change between whole words and float32 on the way.
#include <bit>
#include <cmath>

#include "oracle/arithmetic/declared.hpp"
#include "oracle/arithmetic/error_bound.hpp"
#include "oracle/arithmetic/rail_watch.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/oracle/arithmetic/stimulus_words.hpp"

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
        int floats = 0;
        for (std::int64_t i = 0; i < count; ++i) {
            FilterStage stage = random_stage(random);
            floats += stage.arithmetic.number == NumberKind::float32;
            if (i + 1 < count) {
                stage.arithmetic.stage_format = *sample_format(one_of<std::string_view>(random, {"f32", "q15", "q31"}));
            }
            is_stable = is_stable && is_stable_as_stored(stage);
            made.stages.push_back(std::move(stage));
        }
        if (!is_stable || floats == 0) continue;
        auto described = describe(made.stages, made.in, made.out, 1.0);
        if (!described.described || described.described->missing || !make_twin(*described.described)) continue;
        made.described = std::move(*described.described);
        return made;
    }
}

std::vector<Code> codes_for(Random& random, const SampleFormat& format, std::size_t count) {
    std::vector<Code> codes(count);
    const std::int64_t kind = random.whole(0, 2), run = random.whole(1, 60);
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

}  // namespace

TEST_CASE("mixed chains: no response leaves its limits where they claim to hold", "[arithmetic]") {
    Random random(805);
    INFO("seed 805");
    int limited = 0;
    std::int64_t claimed = 0;
    for (int trial = 0; trial < 250; ++trial) {
        const MixedChain chain = random_mixed_chain(random);
        BoundUse use;
        use.samples = 500;
        const ErrorBound bound = derive(chain.described, use);
        if (std::isinf(bound.largest())) continue;
        ++limited;
        std::string text = "trial " + std::to_string(trial) + ": " + std::string(chain.in.name);
        for (const DescribedStage& stage : chain.described.stages) {
            text += "; " + stage.stage.kind + " " + std::string(name_of(stage.structure)) +
                    (stage.number == NumberKind::float32 ? " float32" : " integer") + " to " +
                    (stage.out.is_float ? "floats" : "words");
        }
        INFO(text);
        for (int run = 0; run < 3; ++run) {
            const auto codes = codes_for(random, chain.in, 500);
            std::vector<double> values(codes.size()), reference(codes.size());
            values_at(chain.described.stages.front().in, codes, values);
            make_declared_filter(chain.described, 1.0)->process(values, reference);
            RailWatch watch(chain.described);
            std::vector<std::uint8_t> exempt(codes.size());
            watch.add(values, exempt);
            const auto response = twin_values_of_codes(chain.described, codes);
            for (std::size_t n = 0; n < codes.size(); ++n) {
                if (exempt[n] != 0) continue;
                ++claimed;
                REQUIRE(response[n] - reference[n] >= bound.lower);
                REQUIRE(response[n] - reference[n] <= bound.upper);
            }
        }
    }
    CHECK(limited > 200);
    CHECK(claimed > 100000);
}
