// The table of all kinds, and the way from a [[filter]] to a stage.
#include <algorithm>
#include <cmath>

#include "oracle/filters/coefficient_file.hpp"
#include "oracle/filters/coefficients.hpp"
#include "oracle/filters/filter_kind.hpp"

namespace halflsb {

namespace {

constexpr std::string_view unknown_name = "unknown";
constexpr std::string_view channels_name = "channels";
constexpr std::string_view initial_name = "initial";
constexpr double most_channels = 255.0;  // the greeting counts them in a byte

std::vector<FilterKind> written_kinds() {
    std::vector<FilterKind> kinds{moving_average_kind(),
                                  fir_kind(),
                                  biquad_cascade_kind(),
                                  iir_kind(),
                                  one_pole_kind(),
                                  dc_blocker_kind(),
                                  notch_kind(),
                                  comb_kind(),
                                  median_kind(),
                                  cic_decimator_kind(),
                                  cic_interpolator_kind(),
                                  fir_decimator_kind(),
                                  fir_interpolator_kind(),
                                  windowed_sinc_kind(),
                                  butterworth_kind(),
                                  chebyshev_kind(),
                                  equaliser_kind(),
                                  weighting_kind(),
                                  octave_band_kind()};
    for (FilterKind& kind : kinds) {
        add_file_words(kind.recipe);
        if (kind.complaint != nullptr) kind.recipe.parameters.push_back(fraction_bits_parameter());
        kind.recipe.parameters.push_back(
            {.name = channels_name,
             .type = ParameterType::integers,
             .minimum = 1.0,
             .maximum = most_channels,
             .help = "The channels that pass this stage, counted from 1; all of them when left out."});
        kind.recipe.parameters.push_back(
            {.name = initial_name,
             .type = ParameterType::choice,
             .choices = {"zeros", "first-sample", "growing"},
             .help = "What stands before the first sample after a reset: zeros, that sample itself, or nothing, a "
                     "moving average being the mean of the samples so far."});
    }
    kinds.push_back({{unknown_name,
                      "A filter that nobody documented. It stands alone, and only rules that need no reference hold.",
                      {}},
                     nullptr,
                     nullptr});
    return kinds;
}

const std::vector<FilterKind>& kinds() {
    static const std::vector<FilterKind> all = written_kinds();
    return all;
}

Outcome<std::optional<int>> fraction_bits_of(const FilterKind& kind, const ParameterValues& values,
                                             const StageArithmetic& arithmetic) {
    const bool is_shift = values.has("shift_bits");
    if (is_shift && values.has(fraction_bits_name)) {
        return refuse(fraction_bits_name, "a firmware that shifts stores no coefficient, and shift_bits is given",
                      "leave " + std::string(fraction_bits_name) + " out, or give coefficient instead of shift_bits");
    }
    if (kind.complaint == nullptr || is_shift) {
        // A moving average stores one number, its reciprocal.
        return is_shift || arithmetic.division != Division::reciprocal ? std::nullopt
                                                                       : arithmetic.coefficient_fraction_bits;
    }
    if (!values.has(fraction_bits_name)) return arithmetic.coefficient_fraction_bits;
    const auto bits = values.integer(kind.recipe, fraction_bits_name);
    if (!bits || *bits < 0 || *bits > static_cast<std::int64_t>(most_fraction_bits)) {
        return refuse(fraction_bits_name, bits ? std::to_string(*bits) + " is out of range" : "not a whole number",
                      "give a whole number from 0 to 62");
    }
    return std::optional<int>(static_cast<int>(*bits));
}

Outcome<std::vector<int>> channels_of(const ParameterValues& values, int channels) {
    std::vector<int> list;
    if (!values.has(channels_name)) return list;
    const std::string remedy = channels == 1
                                   ? "the signal has 1 channel: leave the list out"
                                   : "the signal has " + std::to_string(channels) +
                                         " channels: give whole numbers from 1 to " + std::to_string(channels);
    const std::vector<double> numbers = values.numbers(channels_name);
    if (numbers.empty()) return refuse(channels_name, "no channel passes this stage", remedy);
    for (const double number : numbers) {
        if (!(number >= 1.0 && number <= channels && std::floor(number) == number)) {
            return refuse(channels_name, "there is no channel " + text_of(number), remedy);
        }
        const int channel = static_cast<int>(number);
        if (std::find(list.begin(), list.end(), channel) != list.end()) {
            return refuse(channels_name, "channel " + std::to_string(channel) + " is there twice",
                          "name each channel once");
        }
        list.push_back(channel);
    }
    return list;
}

Outcome<Initial> initial_of(const FilterKind& kind, const ParameterValues& values, const FilterDesign& design) {
    const std::string word = values.text(kind.recipe, initial_name).value_or("zeros");
    const std::string name(kind.recipe.name);
    if (word == "zeros") return Initial::zeros;
    if (word == "first-sample") {
        if (!std::holds_alternative<CicDecimator>(design) && !std::holds_alternative<CicInterpolator>(design))
            return Initial::first_sample;
        return refuse(initial_name,
                      "a " + name +
                          " cannot start as if its first sample had gone on for ever: its "
                          "integrators never rest under a constant",
                      "give initial = \"zeros\"");
    }
    if (word == "growing") {
        if (std::holds_alternative<MovingAverage>(design)) return Initial::growing;
        return refuse(initial_name, "only a moving average grows with its first samples, not the kind " + name,
                      "give initial = \"zeros\" or \"first-sample\"");
    }
    return refuse(initial_name, "\"" + word + "\" is no start", "give \"zeros\", \"first-sample\" or \"growing\"");
}

// A complaint that comes with rounding is about the word length, and has a remedy: more bits.
Outcome<FilterStage> checked_after_rounding(FilterStage stage, Complaint complaint) {
    if (!stage.coefficient_fraction_bits || complaint == nullptr) return stage;
    const auto problem = complaint(with_rounded_coefficients(stage));
    if (!problem) return stage;
    // Finer is not always better by one step (a pole can round inwards, then outwards), so the advice is
    // the first number from which on all do.
    const int given = *stage.coefficient_fraction_bits, most = static_cast<int>(most_fraction_bits);
    int enough = most + 1;
    for (FilterStage finer = stage; enough > given + 1; --enough) {
        finer.coefficient_fraction_bits = enough - 1;
        if (complaint(with_rounded_coefficients(finer))) break;
    }
    return refuse(fraction_bits_name, "with " + std::to_string(given) + " fraction bits " + *problem,
                  enough <= most ? "store the coefficients with " + std::to_string(enough) + " fraction bits or more"
                                 : "no number of fraction bits up to 62 is enough: scale the coefficients");
}

}  // namespace

const std::vector<Recipe>& filter_recipes() {
    static const std::vector<Recipe> recipes = [] {
        std::vector<Recipe> all;
        for (const FilterKind& kind : kinds()) all.push_back(kind.recipe);
        return all;
    }();
    return recipes;
}

Outcome<FilterStage> make_stage(std::string_view kind, const ParameterValues& values, const StageContext& context) {
    const auto found =
        std::find_if(kinds().begin(), kinds().end(), [&](const FilterKind& each) { return each.recipe.name == kind; });
    if (found == kinds().end()) {
        std::string known;
        for (const FilterKind& each : kinds()) known += (known.empty() ? "" : ", ") + std::string(each.recipe.name);
        return refuse("kind", "\"" + std::string(kind) + "\" is no filter kind", "known kinds: " + known);
    }
    if (kind == unknown_name) {
        return Error{ErrorKind::defect, "kind", "an unknown filter has no stage that could be computed", ""};
    }
    auto design = found->make(found->recipe, values, context);
    if (!design) return design.error();
    const auto bits = fraction_bits_of(*found, values, context.arithmetic);
    if (!bits) return bits.error();
    auto channels = channels_of(values, context.channels);
    if (!channels) return channels.error();

    const auto initial = initial_of(*found, values, *design);
    if (!initial) return initial.error();

    FilterStage stage{std::move(*design), *bits, context.arithmetic, std::string(kind), std::move(*channels), *initial};
    stage.arithmetic.coefficient_fraction_bits = *bits;  // what holds for this stage, said once
    return checked_after_rounding(std::move(stage), found->complaint);
}

}  // namespace halflsb
