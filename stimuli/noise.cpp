// White noise, uniform or normal: each sample is a pure function of the seed and of its own index,
// counted from at_samples.
#include "stimuli/inverse_normal.hpp"
#include "stimuli/philox.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

/// Uniform on [-1, 1): the upper 53 bits as -2^53, -2^53 + 2 ... 2^53 - 2 over 2^53, exact.
struct Uniform {
    double operator()(std::uint64_t bits) const {
        const auto whole = static_cast<std::int64_t>(bits >> 11);
        return static_cast<double>(2 * whole - (std::int64_t{1} << 53)) * 0x1p-53;
    }
};

/// Standard normal: the lowest bit is the sign, the upper 52 bits the middle of one of 2^52 equal
/// steps of the upper tail, (2 whole + 1) / 2^54, exact and never 0 or 1/2.
struct Normal {
    double operator()(std::uint64_t bits) const {
        const auto odd = static_cast<std::int64_t>(bits >> 12 << 1 | 1U);
        const double size = normal_quantile_of_upper_tail(static_cast<double>(odd) * 0x1p-54);
        return (bits & 1U) != 0 ? -size : size;
    }
};

template <class Distribution>
class Noise final : public PlacedStimulus {
public:
    Noise(const Placement& placement, std::uint64_t seed) : PlacedStimulus(placement), seed_(seed) {}
    Spectrum spectrum() const override { return {.bands = {{0.0, 0.5}}}; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        const Distribution distribution;
        const double level = placement().level_ratio;
        auto index = static_cast<std::uint64_t>(first_own_index);
        std::size_t i = 0;
        // One call of the generator serves two samples; only an odd start and an odd end waste half.
        if (index % 2 == 1) {
            ratios[i++] = level * distribution(random_bits(seed_, RandomPurpose::noise, index++));
        }
        for (; i + 1 < ratios.size(); i += 2, index += 2) {
            const auto pair = random_pair(seed_, RandomPurpose::noise, index / 2);
            ratios[i] = level * distribution(pair[0]);
            ratios[i + 1] = level * distribution(pair[1]);
        }
        if (i < ratios.size()) ratios[i] = level * distribution(random_bits(seed_, RandomPurpose::noise, index));
    }

    std::uint64_t seed_;
};

StimulusOutcome make_noise(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    const std::uint64_t seed = seed_of(recipe, values);
    if (values.text(recipe, "distribution") == "normal") {
        return std::unique_ptr<const Stimulus>(std::make_unique<Noise<Normal>>(*placement, seed));
    }
    return std::unique_ptr<const Stimulus>(std::make_unique<Noise<Uniform>>(*placement, seed));
}

}  // namespace

Shape noise_shape() {
    std::vector<Parameter> parameters = {
        {.name = "distribution",
         .type = ParameterType::choice,
         .choices = {"uniform", "normal"},
         .help = "Uniform between plus and minus the level, or normal with the level as its rms."},
    };
    // A quarter of full scale: normal noise then saturates once in 16,000 samples (4 sigma).
    const auto placement = placement_parameters(
        LevelSign::positive, 0.25,
        "Bound of uniform noise; rms of normal noise, whose values beyond full scale saturate in the quantiser.");
    parameters.insert(parameters.end(), placement.begin(), placement.end());
    parameters.push_back(seed_parameter("Another seed gives another noise; one seed gives the same codes everywhere."));
    return {{.name = "noise",
             .help = "White noise, each sample independent of the others.",
             .parameters = std::move(parameters)},
            make_noise};
}

}  // namespace halflsb
