// Chains that change the rate: no twin leaves its derived limits where these claim to hold, whatever the phase.
#include "oracle/arithmetic/cic_registers.hpp"
#include "oracle/arithmetic/declared.hpp"
#include "oracle/arithmetic/error_bound.hpp"
#include "oracle/arithmetic/rail_watch.hpp"
#include "oracle/filters/cic.hpp"
#include "oracle/filters/rates.hpp"
#include "tests/oracle/arithmetic/random_description.hpp"
#include "tests/oracle/arithmetic/stimulus_words.hpp"

using namespace halflsb;
using namespace halflsb::testing;

namespace {

std::vector<double> random_taps(Random& random, std::int64_t count) {
    const double scale = 2.0 / static_cast<double>(count);
    std::vector<double> taps{0.5 * scale};
    while (static_cast<std::int64_t>(taps.size()) < count) taps.push_back(scale * random.ratio());
    return taps;
}

/// Half of them as Hogenauer's rule has it, the others whatever grows; registers as wide as nothing discarded needs, or
/// as it takes.
void random_discards(Random& random, FilterStage& stage) {
    const auto& cic = std::get<CicDecimator>(stage.design);
    std::vector<int>& discarded = stage.arithmetic.discarded_bits;
    if (chance(random, 50)) {
        discarded = hogenauer_discards(cic, divisor_of(cic));
    } else {
        int bits = 0;
        for (int j = 0; j < 2 * cic.order; ++j) {
            if (chance(random, 50)) bits += static_cast<int>(random.whole(0, 2));
            discarded.push_back(bits);
        }
    }
    if (chance(random, 70)) stage.arithmetic.state_bits = 16 + growth_bits(cic);
}

FilterStage random_rate_changer(Random& random) {
    FilterStage stage;
    const auto factor = static_cast<int>(random.whole(2, 7));
    const auto phase = static_cast<int>(random.whole(0, factor - 1));
    const auto order = static_cast<int>(random.whole(1, 4)), delay = static_cast<int>(random.whole(1, 2));
    std::optional<int> shift;
    if (chance(random, 60)) shift = static_cast<int>(std::ceil(order * std::log2(factor * delay)));
    switch (random.whole(0, 3)) {
        case 0:
            stage.design = CicDecimator{order, factor, delay, shift, phase};
            stage.kind = "cic-decimator";
            break;
        case 1:
            stage.design = CicInterpolator{order, factor, delay, shift};
            stage.kind = "cic-interpolator";
            break;
        case 2:
            stage.design = FirDecimator{random_taps(random, random.whole(1, 20)), factor, phase};
            stage.kind = "fir-decimator";
            stage.coefficient_fraction_bits = static_cast<int>(random.whole(8, 26));
            break;
        default:
            stage.design = FirInterpolator{random_taps(random, factor * random.whole(1, 4)), factor};
            stage.kind = "fir-interpolator";
            stage.coefficient_fraction_bits = static_cast<int>(random.whole(8, 26));
    }
    return stage;
}

/// One to three stages, one of them at least a changer of the rate.
DescribedChain random_rate_chain(Random& random, bool is_narrow) {
    const SampleFormat format = *sample_format("q15");
    for (;;) {
        FilterChain chain;
        bool is_stable = true;
        const std::int64_t count = random.whole(1, 3), changer = random.whole(0, count - 1);
        for (std::int64_t i = 0; i < count; ++i) {
            FilterStage stage =
                i == changer || chance(random, 30) ? random_rate_changer(random) : random_design(random, false);
            random_arithmetic(random, stage);
            if (is_narrow) random_narrow_words(random, stage);
            // Registers narrower than they grow are refused, and ones that saturate are not for limits.
            if (stage.kind.starts_with("cic")) stage.arithmetic.state_bits.reset();
            if (stage.kind.starts_with("cic")) stage.arithmetic.state_overflow.reset();
            if (stage.kind == "cic-decimator" && chance(random, 70)) random_discards(random, stage);
            if (i + 1 < count) stage.arithmetic.stage_format = format;
            is_stable = is_stable && is_stable_as_stored(stage);
            chain.push_back(std::move(stage));
        }
        if (!is_stable) continue;
        auto described = describe(chain, format, format, 1.0);
        if (described.described && !described.described->missing) return std::move(*described.described);
    }
}

std::string text_of(const DescribedChain& chain) {
    std::string text;
    for (const DescribedStage& s : chain.stages) text += text_of(RandomChain{{}, {}, {}, {{s}, {}}}) + "; ";
    return text;
}

}  // namespace

TEST_CASE("rates: no twin of a chain that changes the rate exceeds its limits where they claim to hold",
          "[arithmetic]") {
    const std::uint64_t seed = 20261205;
    INFO("seed " << seed);
    Random random(seed);
    std::int64_t chains = 0, claimed = 0, exempt_samples = 0, clipped = 0, discarding = 0;
    for (int trial = 0; trial < 250; ++trial) {
        const DescribedChain chain = random_rate_chain(random, trial % 2 == 1);
        const auto twin = make_twin(chain);
        if (twin == nullptr) continue;
        INFO("trial " << trial << ": " << text_of(chain));
        const ErrorBound bound = derive(chain);
        RailWatch watch(chain);
        const auto words = hard_words(random, chain, 400);
        const auto values = values_of_words(chain, words);
        FilterChain stages;
        for (const DescribedStage& stage : chain.stages) stages.push_back(stage.stage);
        const auto count = static_cast<std::size_t>(outputs_after(stages, 400));
        const auto declared = make_declared_filter(chain, 1.0);
        REQUIRE(declared->outputs_for(400) == count);
        REQUIRE(watch.outputs_for(400) == count);
        REQUIRE(twin->outputs_for(400) == count);
        std::vector<std::uint8_t> exempt(count), in_blocks;
        watch.add(values, exempt);
        const auto lost = watch.lost_from(), first_clip = watch.first_clip_index();
        watch.reset();
        for_blocks(Split::random, values.size(), [&](std::size_t first, std::size_t size) {
            std::vector<std::uint8_t> part(watch.outputs_for(size));
            watch.add(std::span(values).subspan(first, size), part);
            in_blocks.insert(in_blocks.end(), part.begin(), part.end());
        });
        REQUIRE(in_blocks == exempt);
        REQUIRE((watch.lost_from() == lost && watch.first_clip_index() == first_clip));
        std::vector<double> reference(count), response(count);
        declared->process(values, reference);
        std::vector<Code> returned(count);
        twin->process(words, returned);
        values_at(chain.stages.back().out, returned, response);
        for (std::size_t n = 0; n < count; ++n) {
            exempt_samples += exempt[n];
            if (exempt[n] != 0) continue;
            ++claimed;
            INFO("output " << n);
            const double error = response[n] - reference[n];
            REQUIRE((error >= bound.lower && error <= bound.upper));
        }
        clipped += first_clip.has_value();
        discarding += std::any_of(stages.begin(), stages.end(), [](const FilterStage& stage) {
            return !stage.arithmetic.discarded_bits.empty() && stage.arithmetic.discarded_bits.back() > 0;
        });
        ++chains;
    }
    // All of it must have happened.
    CHECK(chains > 200);
    CHECK(claimed > 20000);
    CHECK(exempt_samples > 1000);
    CHECK(clipped > 10);
    CHECK(discarding > 50);
}
