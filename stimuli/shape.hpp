// What the shapes share: their common parameters, the silence around them, and the table that the
// catalogue walks. Inside this room only; others see stimulus.hpp.
#pragma once

#include <memory>
#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "stimuli/stimulus.hpp"
#include "stimuli/values_check.hpp"

namespace halflsb {

/// Longest stimulus. Phases are good for it (see wide.hpp), and at 1 MHz it lasts nearly three hours.
inline constexpr std::int64_t longest_stimulus_samples = 10'000'000'000;

/// The start, length and level that every shape has.
struct Placement {
    std::int64_t length_samples = 1;
    std::int64_t at_samples = 0;  ///< 0 .. length_samples - 1; the shape's own index 0 stands here
    double level_ratio = 0.0;     ///< of full scale, -1 .. 1

    std::int64_t own_samples() const { return length_samples - at_samples; }
};

/// Whether a level may be zero or negative.
enum class LevelSign { any, positive };

/// length_samples, at_samples, level_ratio and level_codes, in this order.
std::vector<Parameter> placement_parameters(LevelSign sign, double default_level_ratio, std::string_view level_help);

/// Reads the four parameters; refuses what the table cannot express.
Outcome<Placement> placement_of(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context,
                                LevelSign sign);

Parameter seed_parameter(std::string_view help);
std::uint64_t seed_of(const Recipe& recipe, const ParameterValues& values);

/// A stimulus that is silent outside at_samples .. length_samples - 1.
class PlacedStimulus : public Stimulus {
public:
    explicit PlacedStimulus(const Placement& placement) : placement_(placement) {}
    void fill(std::int64_t first_index, std::span<double> ratios) const final;
    std::int64_t length_samples() const final { return placement_.length_samples; }

protected:
    const Placement& placement() const { return placement_; }
    /// Values for the shape's own indices, 0 .. own_samples() - 1.
    virtual void fill_own(std::int64_t first_own_index, std::span<double> ratios) const = 0;

private:
    Placement placement_;
};

using StimulusOutcome = Outcome<std::unique_ptr<const Stimulus>>;

/// A recipe with what makes a stimulus of it; the values already fit the recipe's table.
struct Shape {
    Recipe recipe;
    StimulusOutcome (*make)(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context);
};

Shape step_shape();
Shape impulse_shape();
Shape chirp_shape();
Shape noise_shape();
Shape sine_shape();
Shape multitone_shape();

/// An Error of kind input.
Error refused(std::string_view parameter, std::string problem, std::string remedy);

/// Refuses a frequency that is not in 0 < f <= rate / 2.
std::optional<Error> frequency_error(std::string_view parameter, double frequency_hz, double rate_hz);

}  // namespace halflsb
