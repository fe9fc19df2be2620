#include "stimuli/shape.hpp"

#include <algorithm>

#include "stimuli/number_text.hpp"

namespace halflsb {

std::vector<Parameter> placement_parameters(LevelSign sign, double default_level_ratio, std::string_view level_help) {
    const bool any = sign == LevelSign::any;
    const auto longest = static_cast<double>(longest_stimulus_samples);
    return {
        {.name = "length_samples",
         .type = ParameterType::integer,
         .unit = "samples",
         .minimum = 1.0,
         .maximum = longest,
         .required = true,
         .help = "Number of samples that are sent."},
        {.name = "at_samples",
         .type = ParameterType::integer,
         .unit = "samples",
         .minimum = 0.0,
         .maximum = longest - 1.0,
         .default_value = 0.0,
         .help = "Index of the first sample of the signal; the samples before it are silent."},
        {.name = "level_ratio",
         .type = ParameterType::real,
         .unit = "of full scale",
         .minimum = any ? -1.0 : 0.0,
         .maximum = 1.0,
         .default_value = default_level_ratio,
         .help = level_help},
        {.name = "level_codes",
         .type = ParameterType::integer,
         .unit = "LSB",
         .minimum = any ? -2147483648.0 : 1.0,
         .maximum = 2147483647.0,
         .help = "The level in codes of the input format, in place of level_ratio; not for f32."},
    };
}

Outcome<Placement> placement_of(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context,
                                LevelSign sign) {
    Placement placement;
    placement.length_samples = values.integer(recipe, "length_samples").value_or(1);
    placement.at_samples = values.integer(recipe, "at_samples").value_or(0);
    if (placement.at_samples >= placement.length_samples) {
        return refused("at_samples",
                       std::to_string(placement.at_samples) + " is not below length_samples = " +
                           std::to_string(placement.length_samples) + ", so nothing would happen",
                       "Start earlier, or make the stimulus longer.");
    }
    if (!values.has("level_codes")) {
        placement.level_ratio = values.number(recipe, "level_ratio").value_or(0.0);
        if (sign == LevelSign::positive && placement.level_ratio == 0.0) {
            return refused("level_ratio", "0 is silence", "Give a level above 0.");
        }
        return placement;
    }
    if (values.has("level_ratio")) {
        return refused("level_codes", "level_ratio is given too", "Keep one of the two.");
    }
    if (!context.input.has_lsb()) {
        return refused("level_codes", "format " + std::string(context.input.name) + " has no LSB",
                       "Give level_ratio instead.");
    }
    const std::int64_t codes = values.integer(recipe, "level_codes").value_or(0);
    const std::int64_t end = std::int64_t{1} << (context.input.word_bits - 1);
    if (codes < -end || codes >= end) {
        return refused("level_codes", std::to_string(codes) + " is not a code of " + std::string(context.input.name),
                       "Give a whole number from " + std::to_string(sign == LevelSign::positive ? 1 : -end) + " to " +
                           std::to_string(end - 1) + ".");
    }
    placement.level_ratio = static_cast<double>(codes) / static_cast<double>(end);
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

std::optional<Error> frequency_error(std::string_view parameter, double frequency_hz, double rate_hz) {
    const double nyquist_hz = rate_hz / 2.0;
    // Written so that a NaN is refused too.
    if (!(frequency_hz > 0.0)) {
        return refused(parameter, number_text(frequency_hz) + " Hz is not above 0 Hz",
                       "Give a frequency above 0 Hz and not above Nyquist, " + number_text(nyquist_hz) + " Hz.");
    }
    if (!(frequency_hz <= nyquist_hz)) {
        return refused(parameter,
                       number_text(frequency_hz) + " Hz is above Nyquist, " + number_text(nyquist_hz) +
                           " Hz at rate_hz = " + number_text(rate_hz),
                       "Give a frequency not above Nyquist, or correct rate_hz.");
    }
    return std::nullopt;
}

}  // namespace halflsb
