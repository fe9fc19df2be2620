#include "oracle/rules/tone_rule.hpp"

namespace halflsb {
namespace {

Parameter real_word(std::string_view name, std::string_view unit, double minimum, double maximum,
                    std::string_view help) {
    return {.name = name, .unit = unit, .minimum = minimum, .maximum = maximum, .help = help};
}

}  // namespace

const Recipe& tone_recipe() {
    static const Recipe recipe{
        "tone",
        "What comes back of one sine, once the filter has settled (IEEE 1241 terms); give at least one limit.",
        {
            real_word("min_sinad_db", "dB", -20.0, 300.0,
                      "Power of the sine over that of noise and distortion, at least."),
            real_word("min_enob_bits", "bits", 0.0, 64.0,
                      "Effective number of bits, at least, from the rms residual and the output's full scale."),
            real_word("max_thd_db", "dB", -300.0, 20.0, "Total harmonic distortion, at most: -60 is a thousandth."),
            real_word("min_sfdr_db", "dB", -20.0, 300.0, "The sine over the largest other line, at least."),
            {.name = "highest_harmonic",
             .type = ParameterType::integer,
             .minimum = 2.0,
             .maximum = 50.0,
             .default_value = ToneRule{}.highest_harmonic,
             .help = "Harmonics from the second to this one are the distortion."},
            {.name = "frequency",
             .type = ParameterType::choice,
             .choices = {"known", "fitted"},
             .help = "Whether the sine has the frequency of the stimulus, or one nearby that is fitted, as of a board "
                     "with a clock of its own."},
        }};
    return recipe;
}

Outcome<ToneRule> make_tone_rule(const ParameterValues& values, const RuleContext&) {
    ToneRule rule;
    rule.min_sinad_db = values.number(tone_recipe(), "min_sinad_db");
    rule.min_enob_bits = values.number(tone_recipe(), "min_enob_bits");
    rule.max_thd_db = values.number(tone_recipe(), "max_thd_db");
    rule.min_sfdr_db = values.number(tone_recipe(), "min_sfdr_db");
    rule.highest_harmonic = static_cast<int>(*values.integer(tone_recipe(), "highest_harmonic"));
    rule.fits_frequency = values.text(tone_recipe(), "frequency") == "fitted";
    if (!rule.min_sinad_db && !rule.min_enob_bits && !rule.max_thd_db && !rule.min_sfdr_db) {
        return refused_word("kind", "a rule of kind \"tone\" without a limit judges nothing",
                            "give at least one of min_sinad_db, min_enob_bits, max_thd_db and min_sfdr_db");
    }
    return rule;
}

}  // namespace halflsb
