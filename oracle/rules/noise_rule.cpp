#include "oracle/rules/noise_rule.hpp"

#include <cmath>
#include <string>
#include <utility>

#include "stimuli/number_text.hpp"

namespace halflsb {
namespace {

constexpr LimitWords excess_words{"max_excess_lsb", "max_excess_ratio", "max_excess_unit"};

Parameter gain_db_word(std::string_view name, std::string_view help) {
    return {.name = name, .type = ParameterType::real, .unit = "dB", .minimum = -400.0, .maximum = 400.0, .help = help};
}

Outcome<std::optional<GainLimit>> read_gain(const ParameterValues& values, std::string_view db_word,
                                            std::string_view ratio_word) {
    const auto db = values.number(noise_recipe(), db_word), ratio = values.number(noise_recipe(), ratio_word);
    if (db && ratio) {
        return refused_word(
            std::string(ratio_word),
            "the same limit is given twice, as " + std::string(db_word) + " and as " + std::string(ratio_word),
            "keep one of the two");
    }
    std::optional<GainLimit> limit;
    if (db) limit = GainLimit{*db, true};
    if (ratio) limit = GainLimit{*ratio, false};
    return limit;
}

double ratio_of(const GainLimit& limit) { return limit.is_db ? std::pow(10.0, limit.number / 10.0) : limit.number; }

}  // namespace

const Recipe& noise_recipe() {
    static const Recipe recipe{
        "noise",
        "Power of the output over power of the input, means removed, of white noise; and the noise that the board "
        "adds. Give at least one limit.",
        {
            gain_db_word("min_gain_db", "Least noise gain, 10 lg of the ratio of the powers."),
            gain_db_word("max_gain_db", "Largest noise gain, 10 lg of the ratio of the powers."),
            {.name = "min_gain",
             .type = ParameterType::real,
             .minimum = 0.0,
             .help = "Least ratio of the powers; a moving average of M points has 1 / M."},
            {.name = "max_gain", .type = ParameterType::real, .minimum = 0.0, .help = "Largest ratio of the powers."},
            {.name = "relative_to",
             .type = ParameterType::choice,
             .choices = {"absolute", "design"},
             .help = "Whether the gain limits hold for the gain itself or for its ratio to the design's."},
            limit_word("max_excess_lsb", "LSB",
                       "Noise that the board adds: rms of response minus design, its mean removed."),
            limit_word("max_excess_ratio", "of full scale", "The same, as a fraction of the output's full scale."),
            limit_word("max_excess_unit", "unit", "The same, in the unit of [signal]."),
            {.name = "delta_db",
             .unit = "dB",
             .minimum = 0.001,
             .maximum = 20.0,
             .default_value = NoiseRule{}.delta_db,
             .help = "Zone of indifference beyond each limit, in decibels of a power: a figure in it may be told "
                     "either way."},
        }};
    return recipe;
}

Outcome<NoiseRule> make_noise_rule(const ParameterValues& values, const RuleContext& context) {
    NoiseRule rule;
    auto least = read_gain(values, "min_gain_db", "min_gain");
    if (!least) return least.error();
    auto largest = read_gain(values, "max_gain_db", "max_gain");
    if (!largest) return largest.error();
    auto excess = read_limit(values, noise_recipe(), excess_words, context);
    if (!excess) return excess.error();
    rule.least_gain = *least;
    rule.largest_gain = *largest;
    rule.excess = *excess;
    rule.relative_to_design = values.text(noise_recipe(), "relative_to") == "design";
    rule.delta_db = *values.number(noise_recipe(), "delta_db");
    if (!rule.least_gain && !rule.largest_gain && !rule.excess) {
        return refused_word("kind", "a rule of kind \"noise\" without a limit judges nothing",
                            "give at least one of min_gain_db, max_gain_db, min_gain, max_gain and max_excess_lsb (or "
                            "_ratio, _unit)");
    }
    if (rule.least_gain && rule.largest_gain && !(ratio_of(*rule.least_gain) <= ratio_of(*rule.largest_gain))) {
        return refused_word(rule.least_gain->is_db ? "min_gain_db" : "min_gain",
                            "the limits of the noise gain cross: " + number_text(rule.least_gain->number) +
                                (rule.least_gain->is_db ? " dB" : "") + " is above " +
                                number_text(rule.largest_gain->number) + (rule.largest_gain->is_db ? " dB" : ""),
                            "exchange them");
    }
    return rule;
}

}  // namespace halflsb
