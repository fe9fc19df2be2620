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

/// The start and length of a shape, and the level of those that have one.
struct Placement {
    std::int64_t length_samples = 1;
    std::int64_t at_samples = 0;  ///< 0 .. length_samples - 1; the shape's own index 0 stands here
    double level_ratio = 0.0;     ///< of full scale, -1 .. 1; 0 for a shape without a level

    std::int64_t own_samples() const { return length_samples - at_samples; }
};

/// Whether a level may be zero or negative.
enum class LevelSign { any, positive };

Parameter length_parameter();
Parameter start_parameter();
/// NAME_ratio, NAME_codes and NAME_unit for the name "level", in this order, of which one may be given.
std::vector<Parameter> level_parameters(std::string_view name, LevelSign sign, std::optional<double> default_ratio,
                                        std::string_view help);
/// length_samples, at_samples and the three of "level".
std::vector<Parameter> placement_parameters(LevelSign sign, double default_level_ratio, std::string_view level_help);

/// Reads length_samples and at_samples; refuses what the table cannot express.
Outcome<Placement> span_of(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context);
/// The ratio of full scale that NAME_ratio, NAME_codes or NAME_unit say, or the default of NAME_ratio.
Outcome<double> level_of(std::string_view name, const Recipe& recipe, const ParameterValues& values,
                         const StimulusContext& context);
/// span_of() and the level_of() "level".
Outcome<Placement> placement_of(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context);

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
Shape silence_shape();
Shape ramp_shape();
Shape square_shape();
Shape signs_shape();
Shape chirp_shape();
Shape noise_shape();
Shape prbs_shape();
Shape sine_shape();
Shape multitone_shape();
Shape burst_shape();
Shape file_shape();
Shape sequence_shape();

/// What makes a stimulus of values that fit the shape's recipe, its `add` included.
StimulusOutcome make_fitting_stimulus(std::string_view shape, const ParameterValues& values,
                                      const StimulusContext& context);

/// The list `add`, which every shape has.
Parameter add_parameter();
/// Ascending and apart: bands that touch or overlap become one.
std::vector<Spectrum::Band> joined_bands(std::vector<Spectrum::Band> bands);
/// `base` with the stimuli of the list added to it.
StimulusOutcome make_sum(std::unique_ptr<const Stimulus> base, const std::vector<StimulusWords>& added,
                         const StimulusContext& context);

/// An Error of kind input.
Error refused(std::string_view parameter, std::string problem, std::string remedy);
/// "parts[2]." before the place of an error in the second stimulus of the list `parts`.
Error inside(std::string_view list, std::size_t index, Error error);

/// Refuses a frequency that is not in 0 < f <= rate / 2.
std::optional<Error> frequency_error(std::string_view parameter, double frequency_hz, double rate_hz);

}  // namespace halflsb
