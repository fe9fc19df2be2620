// A pattern of the level and its negative, one sign a sample: what drives a node of a filter the hardest is the signs
// of its impulse response, reversed in time (Jackson 1970; `halflsb predict` prints them). Silence before and after it.
//
// No spectrum is claimed: it is a transient.
#include "stimuli/number_text.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

class Signs final : public PlacedStimulus {
public:
    Signs(const Placement& placement, std::string signs) : PlacedStimulus(placement), signs_(std::move(signs)) {}
    Spectrum spectrum() const override { return {}; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        auto index = static_cast<std::uint64_t>(first_own_index);
        for (double& ratio : ratios) {
            const char sign = index < signs_.size() ? signs_[index] : '0';
            ratio = sign == '+' ? placement().level_ratio : sign == '-' ? -placement().level_ratio : 0.0;
            ++index;
        }
    }

    std::string signs_;
};

StimulusOutcome make_signs(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    const auto placement = placement_of(recipe, values, context);
    if (!placement) return placement.error();
    const std::string signs = *values.text(recipe, "signs");
    if (const auto other = signs.find_first_not_of("+-0"); other != std::string::npos || signs.empty()) {
        return refused("signs",
                       signs.empty() ? "there is no sign"
                                     : "character " + number_text(static_cast<double>(other + 1)) + " is no sign",
                       "write +, - and 0 only, one for each sample: \"++-+0\"");
    }
    if (static_cast<std::int64_t>(signs.size()) > placement->own_samples()) {
        return refused(
            "signs",
            "there are " + std::to_string(signs.size()) + " signs for " + std::to_string(placement->own_samples()) +
                " samples",
            "give length_samples = " + std::to_string(placement->at_samples + static_cast<std::int64_t>(signs.size())) +
                " or more");
    }
    return std::unique_ptr<const Stimulus>(std::make_unique<Signs>(*placement, signs));
}

}  // namespace

Shape signs_shape() {
    std::vector<Parameter> parameters = {
        {.name = "signs",
         .type = ParameterType::text,
         .unit = "characters",
         .maximum = 65536,
         .required = true,
         .help = "One of +, - and 0 for each sample from at_samples on: the level, its negative, silence."},
    };
    const auto placement = placement_parameters(LevelSign::positive, 0.5, "The level of a +; a - is its negative.");
    parameters.insert(parameters.end(), placement.begin(), placement.end());
    return {
        {.name = "signs",
         .help = "A pattern of a level and its negative, sample by sample; with the signs that predict prints for a "
                 "node it drives that node the hardest.",
         .parameters = std::move(parameters)},
        make_signs};
}

}  // namespace halflsb
