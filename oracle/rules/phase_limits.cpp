#include "oracle/rules/phase_limits.hpp"

#include "oracle/rules/rule_words.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {
namespace {

constexpr std::string_view words_about_limits[] = {"phase_relative_to", "phase_from_hz", "phase_to_hz",
                                                   "passband_db",       "delta_deg",     "delta_samples"};

std::optional<Error> idle_word(const ParameterValues& values) {
    for (const std::string_view word : words_about_limits) {
        if (!values.has(word)) continue;
        return refused_word(std::string(word),
                            std::string(word) +
                                " says how phase and group delay are held, and no "
                                "limit holds them",
                            "give max_phase_deg or max_group_delay_samples, or leave it out");
    }
    return std::nullopt;
}

}  // namespace

std::vector<Parameter> phase_parameters() {
    return {
        {.name = "max_phase_deg",
         .unit = "degrees",
         .minimum = 0.0,
         .maximum = 180.0,
         .above_minimum = true,
         .help = "Largest phase, either way; whole samples of latency are taken off before."},
        {.name = "max_group_delay_samples",
         .unit = "samples",
         .minimum = -1e6,
         .maximum = 1e6,
         .help = "Largest group delay, as its mean over steps of a sixteenth of the range; relative to the design: "
                 "largest difference, either way."},
        {.name = "min_group_delay_samples",
         .unit = "samples",
         .minimum = -1e6,
         .maximum = 1e6,
         .help = "Least group delay; with phase_relative_to = \"absolute\" only."},
        {.name = "phase_relative_to",
         .type = ParameterType::choice,
         .choices = {"design", "absolute"},
         .help = "Whether these limits hold for the difference from the design or for phase and delay themselves."},
        {.name = "phase_from_hz",
         .unit = "Hz",
         .minimum = 0.0,
         .help = "Where they hold, with phase_to_hz; left out: where the design's gain is within passband_db of its "
                 "highest."},
        {.name = "phase_to_hz", .unit = "Hz", .minimum = 0.0, .help = "Upper edge, not above Nyquist."},
        {.name = "passband_db",
         .unit = "dB",
         .minimum = 0.01,
         .maximum = 200.0,
         .default_value = PhaseLimits{}.passband_db,
         .help = "How far below its highest gain the design still passes."},
        {.name = "delta_deg",
         .unit = "degrees",
         .minimum = 0.001,
         .maximum = 90.0,
         .default_value = PhaseLimits{}.delta_deg,
         .help = "Zone of indifference beyond max_phase_deg."},
        {.name = "delta_samples",
         .unit = "samples",
         .minimum = 1e-6,
         .maximum = 1000.0,
         .default_value = PhaseLimits{}.delta_samples,
         .help = "Zone of indifference beyond each limit of the group delay."},
    };
}

Outcome<PhaseLimits> make_phase_limits(const Recipe& recipe, const ParameterValues& values, double nyquist_hz) {
    PhaseLimits limits;
    limits.max_phase_deg = values.number(recipe, "max_phase_deg");
    limits.max_group_delay_samples = values.number(recipe, "max_group_delay_samples");
    limits.min_group_delay_samples = values.number(recipe, "min_group_delay_samples");
    limits.relative_to_design = values.text(recipe, "phase_relative_to") == "design";
    limits.from_hz = values.number(recipe, "phase_from_hz");
    limits.to_hz = values.number(recipe, "phase_to_hz");
    limits.passband_db = *values.number(recipe, "passband_db");
    limits.delta_deg = *values.number(recipe, "delta_deg");
    limits.delta_samples = *values.number(recipe, "delta_samples");
    if (!limits.any()) {
        if (const auto error = idle_word(values)) return *error;
        return limits;
    }
    if (limits.relative_to_design && limits.min_group_delay_samples) {
        return refused_word("min_group_delay_samples", "a difference from the design is held from above only",
                            "give max_group_delay_samples, or phase_relative_to = \"absolute\"");
    }
    if (limits.relative_to_design && limits.max_group_delay_samples && !(*limits.max_group_delay_samples > 0.0)) {
        return refused_word("max_group_delay_samples", "a difference from the design cannot be kept at 0 or below",
                            "give a limit above 0, or phase_relative_to = \"absolute\"");
    }
    if (limits.min_group_delay_samples && limits.max_group_delay_samples &&
        !(*limits.min_group_delay_samples <= *limits.max_group_delay_samples)) {
        return refused_word(
            "min_group_delay_samples",
            "the limits cross: min_group_delay_samples = " + number_text(*limits.min_group_delay_samples) +
                " is above max_group_delay_samples = " + number_text(*limits.max_group_delay_samples),
            "exchange them");
    }
    if (limits.from_hz.has_value() != limits.to_hz.has_value()) {
        return refused_word(limits.from_hz ? "phase_from_hz" : "phase_to_hz",
                            "phase_from_hz and phase_to_hz come together", "give both or none");
    }
    if (limits.from_hz && values.has("passband_db"))
        return refused_word("passband_db", "passband_db and phase_from_hz both say where the limits hold",
                            "leave one of them out");
    if (limits.from_hz && !(*limits.from_hz < *limits.to_hz))
        return refused_word("phase_from_hz", "the range of the phase runs backwards", "exchange the two");
    if (limits.to_hz && !(*limits.to_hz <= nyquist_hz)) {
        return refused_word(
            "phase_to_hz",
            "phase_to_hz = " + number_text(*limits.to_hz) + " is above Nyquist, " + number_text(nyquist_hz) + " Hz",
            "end the range at " + number_text(nyquist_hz) + " Hz or below");
    }
    return limits;
}

}  // namespace halflsb
