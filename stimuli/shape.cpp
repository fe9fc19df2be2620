#include "stimuli/shape.hpp"

#include <algorithm>

#include "stimuli/number_text.hpp"

namespace halflsb {

Parameter length_parameter() {
    return {.name = "length_samples",
            .type = ParameterType::integer,
            .unit = "samples",
            .minimum = 1.0,
            .maximum = static_cast<double>(longest_stimulus_samples),
            .required = true,
            .help = "Number of samples that are sent; a stimulus in add may leave it out."};
}

Parameter start_parameter() {
    return {.name = "at_samples",
            .type = ParameterType::integer,
            .unit = "samples",
            .minimum = 0.0,
            .maximum = static_cast<double>(longest_stimulus_samples) - 1.0,
            .default_value = 0.0,
            .help = "Index of the first sample of the signal; the samples before it are silent."};
}

std::vector<Parameter> placement_parameters(LevelSign sign, double default_level_ratio, std::string_view level_help) {
    std::vector<Parameter> parameters = {length_parameter(), start_parameter()};
    const auto level = level_parameters("level", sign, default_level_ratio, level_help);
    parameters.insert(parameters.end(), level.begin(), level.end());
    return parameters;
}

Outcome<Placement> span_of(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    Placement placement;
    const auto length = values.integer(recipe, "length_samples");
    if (!length && !context.default_length_samples) {
        return refused("length_samples", "is missing, and \"" + std::string(recipe.name) + "\" needs it",
                       "give a whole number");
    }
    placement.length_samples = length ? *length : *context.default_length_samples;
    placement.at_samples = values.integer(recipe, "at_samples").value_or(0);
    if (placement.at_samples >= placement.length_samples) {
        return refused("at_samples",
                       std::to_string(placement.at_samples) + " is not below length_samples = " +
                           std::to_string(placement.length_samples) + ", so nothing would happen",
                       "start earlier, or make the stimulus longer");
    }
    return placement;
}

Outcome<Placement> placement_of(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    auto placement = span_of(recipe, values, context);
    if (!placement) return placement;
    const auto level = level_of("level", recipe, values, context);
    if (!level) return level.error();
    placement->level_ratio = *level;
    return placement;
}

Parameter seed_parameter(std::string_view help) {
    // Up to 2^53 - 1, so that a seed survives any tool that keeps numbers as doubles.
    return {.name = "seed",
            .type = ParameterType::integer,
            .minimum = 0.0,
            .maximum = 9007199254740991.0,
            .default_value = 1.0,
            .help = help};
}

std::uint64_t seed_of(const Recipe& recipe, const ParameterValues& values) {
    return static_cast<std::uint64_t>(values.integer(recipe, "seed").value_or(0));
}

void PlacedStimulus::fill(std::int64_t first_index, std::span<double> ratios) const {
    // Counted from the front of the span, so that no sum of index and size can overflow.
    const auto size = static_cast<std::int64_t>(ratios.size());
    std::int64_t begin = size;
    if (first_index >= placement_.at_samples) {
        begin = 0;
    } else if (first_index > placement_.at_samples - size) {
        begin = placement_.at_samples - first_index;
    }
    std::int64_t end = begin;
    if (begin < size && first_index < placement_.length_samples) {
        end = std::max(begin, std::min(size, placement_.length_samples - first_index));
    }
    const auto at = [&](std::int64_t position) { return ratios.begin() + static_cast<std::ptrdiff_t>(position); };
    std::fill(at(0), at(begin), 0.0);
    if (begin < end) {
        fill_own(first_index + begin - placement_.at_samples,
                 ratios.subspan(static_cast<std::size_t>(begin), static_cast<std::size_t>(end - begin)));
    }
    std::fill(at(end), at(size), 0.0);
}

Error refused(std::string_view parameter, std::string problem, std::string remedy) {
    return Error{ErrorKind::input, std::string(parameter), std::move(problem), std::move(remedy)};
}

Error inside(std::string_view list, std::size_t index, Error error) {
    error.place = std::string(list) + "[" + std::to_string(index + 1) + "]." + error.place;
    return error;
}

std::optional<Error> frequency_error(std::string_view parameter, double frequency_hz, double rate_hz) {
    const double nyquist_hz = rate_hz / 2.0;
    // Written so that a NaN is refused too.
    if (!(frequency_hz > 0.0)) {
        return refused(parameter, number_text(frequency_hz) + " Hz is not above 0 Hz",
                       "give a frequency above 0 Hz and not above Nyquist, " + number_text(nyquist_hz) + " Hz");
    }
    if (!(frequency_hz <= nyquist_hz)) {
        return refused(parameter,
                       number_text(frequency_hz) + " Hz is above Nyquist, " + number_text(nyquist_hz) +
                           " Hz at rate_hz = " + number_text(rate_hz),
                       "give a frequency not above Nyquist, or correct rate_hz");
    }
    return std::nullopt;
}

}  // namespace halflsb
