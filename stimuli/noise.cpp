// White noise, uniform or normal, each sample a pure function of the seed and its own index.
#include "stimuli/philox.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

class UniformNoise final : public PlacedStimulus {
public:
    UniformNoise(const Placement& placement, std::uint64_t seed) : PlacedStimulus(placement), seed_(seed) {}
    Spectrum spectrum() const override { return {.to_cycles_per_sample = 0.5}; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        auto index = static_cast<std::uint64_t>(first_own_index);
        for (double& ratio : ratios) {
            // 53 bits as -2^53, -2^53 + 2 ... 2^53 - 2, exact, then [-level, +level).
            const auto whole = static_cast<std::int64_t>(random_bits(seed_, RandomPurpose::noise, index++) >> 11);
            ratio = placement().level_ratio * (static_cast<double>(2 * whole - (std::int64_t{1} << 53)) * 0x1p-53);
        }
    }

    std::uint64_t seed_;
};

StimulusOutcome make_noise(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context, LevelSign::positive);
    if (!placement) return placement.error();
    const auto seed = static_cast<std::uint64_t>(values.integer(recipe, "seed").value_or(1));
    return std::unique_ptr<const Stimulus>(std::make_unique<UniformNoise>(*placement, seed));
}

}  // namespace

Shape noise_shape() {
    std::vector<Parameter> parameters =
        placement_parameters(LevelSign::positive, 0.25,
                             "Bound of uniform noise; rms of normal noise, whose values beyond full scale saturate.");
    parameters.push_back({.name = "seed",
                          .type = ParameterType::integer,
                          .unit = "",
                          .minimum = 0.0,
                          .maximum = 9007199254740991.0,
                          .default_value = 1.0,
                          .help = "Another seed gives another noise; the same seed the same codes on every machine."});
    return {{.name = "noise",
             .help = "White noise, each sample independent of the others.",
             .parameters = std::move(parameters)},
            make_noise};
}

}  // namespace halflsb
