// Explicit samples: one column of a file, as codes of the input format, as ratios of full scale or in the
// engineering unit. The file was read and its bytes checked elsewhere; here its numbers are. Codes arrive
// as exactly those codes: code / 2^(word_bits - 1) is exact in a double, and so is the way back.
//
// No spectrum is claimed: what a recording holds is not known on paper, and a response rule that rests on
// a band where the file happens to have no power would judge noise.
#include <algorithm>
#include <charconv>
#include <cmath>

#include "stimuli/number_text.hpp"
#include "stimuli/shape.hpp"

namespace halflsb {

namespace {

/// ratio = (value - zero) / full_scale
struct Scale {
    double zero = 0.0, full_scale = 1.0;
};

class FileSamples final : public PlacedStimulus {
public:
    FileSamples(const Placement& placement, std::shared_ptr<const SignalFile> file, std::size_t column,
                const Scale& scale)
        : PlacedStimulus(placement), file_(std::move(file)), column_(column), scale_(scale) {}
    Spectrum spectrum() const override { return {}; }

private:
    void fill_own(std::int64_t first_own_index, std::span<double> ratios) const override {
        const std::vector<double>& samples = file_->columns[column_];
        std::size_t at = static_cast<std::size_t>(first_own_index) % samples.size();
        for (double& ratio : ratios) {
            ratio = (samples[at] - scale_.zero) / scale_.full_scale;
            if (++at == samples.size()) at = 0;
        }
    }

    std::shared_ptr<const SignalFile> file_;
    std::size_t column_;
    Scale scale_;
};

std::string columns_text(const SignalFile& file) {
    std::string text;
    for (std::size_t i = 0; i < file.columns.size(); ++i) {
        const std::string name = i < file.names.size() ? file.names[i] : "";
        text += (i == 0 ? "" : ", ") + (name.empty() ? std::to_string(i + 1) : name);
    }
    return text;
}

/// A name counts before a number, so that a column whose heading is a number is found.
Outcome<std::size_t> column_of(const Recipe& recipe, const ParameterValues& values, const SignalFile& file) {
    if (file.columns.empty()) {
        return refused("file", "\"" + file.path + "\" holds no samples", "name a file with at least one");
    }
    const std::string one_of = "give column = one of: " + columns_text(file) + ", or its number from 1, in quotes";
    const auto column = values.text(recipe, "column");
    if (!column) {
        if (file.columns.size() == 1) return std::size_t{0};
        return refused("column", "\"" + file.path + "\" has " + std::to_string(file.columns.size()) + " columns",
                       one_of);
    }
    const std::size_t named = std::min(file.names.size(), file.columns.size());
    for (std::size_t i = 0; i < named; ++i) {
        if (file.names[i] == *column) return i;
    }
    std::size_t number = 0;
    const auto [end, error] = std::from_chars(column->data(), column->data() + column->size(), number);
    const bool is_number = error == std::errc() && end == column->data() + column->size();
    if (is_number && number >= 1) {
        // The numbers are those of the file, where the times are a column too.
        if (number == file.time_column) {
            return refused("column", "column \"" + *column + "\" of \"" + file.path + "\" holds the times", one_of);
        }
        const bool behind_times = file.time_column != 0 && number > file.time_column;
        const std::size_t index = number - 1 - (behind_times ? 1 : 0);
        if (index < file.columns.size()) return index;
    }
    return refused("column", "\"" + file.path + "\" has no column \"" + *column + "\"", one_of);
}

enum class Holds { codes, ratio, unit };

Holds meaning_of(const Recipe& recipe, const ParameterValues& values, const SignalFile& file,
                 const SampleFormat& input) {
    const auto word = values.text(recipe, "holds");
    if (word == "codes") return Holds::codes;
    if (word == "ratio") return Holds::ratio;
    if (word == "unit") return Holds::unit;
    return file.whole_numbers && input.has_lsb() ? Holds::codes : Holds::ratio;
}

Outcome<Scale> scale_of(Holds holds, const StimulusContext& context) {
    const SampleFormat& input = context.input;
    if (holds == Holds::ratio) return Scale{};
    if (holds == Holds::unit) {
        if (context.full_scale_unit) return Scale{0.0, *context.full_scale_unit};
        return refused("holds", "nothing says what full scale of the input means in a unit",
                       "say so in [signal], or let the file hold ratios of full scale");
    }
    if (input.has_lsb()) {
        return Scale{static_cast<double>(zero_code(input)), std::ldexp(1.0, input.word_bits - 1)};
    }
    return refused("holds", "format " + std::string(input.name) + " has no codes that count",
                   "let the file hold ratios of full scale, holds = \"ratio\"");
}

/// The first sample that cannot be sent.
std::optional<Error> sample_error(const SignalFile& file, std::size_t column, Holds holds, const Scale& scale,
                                  const SampleFormat& input) {
    const std::vector<double>& samples = file.columns[column];
    const double lowest = scale.zero - scale.full_scale, highest = scale.zero + scale.full_scale - 1.0;
    for (std::size_t i = 0; i < samples.size(); ++i) {
        const double sample = samples[i];
        const auto refuse = [&](const std::string& problem, std::string remedy) {
            return refused("file",
                           "sample " + std::to_string(i) + " of \"" + file.path + "\", counted from 0, is " +
                               number_text(sample) + problem,
                           std::move(remedy));
        };
        if (!std::isfinite(sample)) return refuse("", "only finite numbers can be sent");
        if (holds == Holds::codes) {
            if (std::floor(sample) != sample) {
                return refuse(", and a code is a whole number",
                              "say what the file holds: holds = \"ratio\" or \"unit\"");
            }
            if (sample < lowest || sample > highest) {
                return refuse(", which is no code of " + std::string(input.name),
                              "its codes are " + number_text(lowest) + " to " + number_text(highest));
            }
        } else if (!(std::abs(sample / scale.full_scale) <= 1.0)) {
            return refuse(", beyond full scale, " + number_text(std::abs(scale.full_scale)),
                          "say what the file holds, or scale it");
        }
    }
    return std::nullopt;
}

std::optional<Error> rate_error(const Recipe& recipe, const ParameterValues& values, const SignalFile& file,
                                double rate_hz) {
    const auto differs = [&](std::string_view place, const std::string& who, double recorded_hz) {
        return refused(place,
                       who + " " + number_text(recorded_hz) + " Hz, the signal has " + number_text(rate_hz) + " Hz",
                       "resample the file, or correct the rate");
    };
    if (const auto recorded_hz = values.number(recipe, "recorded_rate_hz"); recorded_hz && *recorded_hz != rate_hz) {
        return differs("recorded_rate_hz", "it was recorded at", *recorded_hz);
    }
    if (file.rate_hz && *file.rate_hz != rate_hz) {
        return differs("file", "\"" + file.path + "\" says that it was recorded at", *file.rate_hz);
    }
    return std::nullopt;
}

/// Where the file's own length, its repeats and at_samples leave the end.
Outcome<Placement> span_of_file(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context,
                                std::size_t file_samples) {
    const std::int64_t repeats = values.integer(recipe, "repeat").value_or(1);
    const std::int64_t at_samples = values.integer(recipe, "at_samples").value_or(0);
    const auto once = static_cast<std::int64_t>(file_samples);
    if (once > (longest_stimulus_samples - at_samples) / repeats) {
        return refused(repeats > 1 ? "repeat" : "file",
                       std::to_string(repeats) + " times " + std::to_string(once) + " samples, from " +
                           std::to_string(at_samples) + " on, are more than the longest stimulus, " +
                           std::to_string(longest_stimulus_samples),
                       "repeat it less often");
    }
    const std::int64_t natural = at_samples + once * repeats;
    const std::int64_t host = context.default_length_samples.value_or(natural);
    if (natural > host && !values.has("length_samples")) {
        return refused("file",
                       "its " + std::to_string(natural) + " samples are more than the " + std::to_string(host) +
                           " of the stimulus that it is added to",
                       "say how much of it is meant: length_samples = " + std::to_string(host));
    }
    StimulusContext own = context;
    own.default_length_samples = natural;
    auto placement = span_of(recipe, values, own);
    if (placement && placement->length_samples > natural) {
        return refused("length_samples",
                       std::to_string(placement->length_samples) + " samples are more than the file gives, " +
                           std::to_string(natural),
                       "give at most " + std::to_string(natural) + ", or a larger repeat");
    }
    return placement;
}

StimulusOutcome make_file(const Recipe& recipe, const ParameterValues& values, const StimulusContext& context) {
    const auto file = values.signal_file("file");
    const auto column = column_of(recipe, values, *file);
    if (!column) return column.error();
    if (file->columns[*column].empty()) {
        return refused("file", "\"" + file->path + "\" holds no samples", "name a file with at least one");
    }
    if (auto error = rate_error(recipe, values, *file, context.rate_hz)) return *error;
    const Holds holds = meaning_of(recipe, values, *file, context.input);
    const auto scale = scale_of(holds, context);
    if (!scale) return scale.error();
    if (auto error = sample_error(*file, *column, holds, *scale, context.input)) return *error;
    const auto placement = span_of_file(recipe, values, context, file->columns[*column].size());
    if (!placement) return placement.error();
    return std::unique_ptr<const Stimulus>(std::make_unique<FileSamples>(*placement, file, *column, *scale));
}

}  // namespace

Shape file_shape() {
    Parameter length = length_parameter();
    length.required = false;
    length.help = "Number of samples that are sent, at most those of the file; all when left out.";
    return {{.name = "file",
             .help = "The samples of a CSV or NPY file.",
             .parameters =
                 {
                     {.name = "file",
                      .type = ParameterType::signal_file,
                      .required = true,
                      .help = "A CSV or NPY file under the root."},
                     {.name = "column",
                      .type = ParameterType::text,
                      .maximum = 200,
                      .help = "Name of the column, or its number in the file from 1, in quotes; needed when there are "
                              "several."},
                     {.name = "holds",
                      .type = ParameterType::choice,
                      .choices = {"auto", "codes", "ratio", "unit"},
                      .help = "What a number is: a code of the input format (u12: 0 to 4095), a ratio of full scale, "
                              "a value in the unit; auto takes whole numbers as codes, else ratios."},
                     {.name = "recorded_rate_hz",
                      .type = ParameterType::real,
                      .unit = "Hz",
                      .minimum = 0.0,
                      .above_minimum = true,
                      .help = "The rate of the recording; must be that of the signal."},
                     length,
                     start_parameter(),
                     {.name = "repeat",
                      .type = ParameterType::integer,
                      .minimum = 1.0,
                      .maximum = static_cast<double>(longest_stimulus_samples),
                      .default_value = 1.0,
                      .help = "How often the samples are gone through."},
                 }},
            make_file};
}

}  // namespace halflsb
