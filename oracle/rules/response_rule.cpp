#include "oracle/rules/response_rule.hpp"

#include <cmath>
#include <string>

#include "oracle/rules/standard_masks.hpp"
#include "stimuli/number_text.hpp"

namespace halflsb {

namespace {

Recipe recipe_with_phase() {
    Recipe recipe{
        "response",
        "Gain, phase and group delay against limits, from a noise, chirp, sine or multitone stimulus, judged against "
        "the design.",
        {
            {.name = "bands",
             .type = ParameterType::bands,
             .help = "Array of {from_hz, to_hz, min_db, max_db}; one of min_db and max_db may be left out."},
            {.name = "relative_to",
             .type = ParameterType::choice,
             .choices = {"absolute", "design"},
             .help = "Whether the limits hold for the gain itself or for its deviation from the design."},
            {.name = "delta_db",
             .unit = "dB",
             .minimum = 0.001,
             .maximum = 20.0,
             .default_value = ResponseRule{}.delta_db,
             .help = "Zone of indifference beyond each limit: a gain in it may be told either way. The narrower, the "
                     "more samples it takes to tell."},
            {.name = "mask",
             .type = ParameterType::choice,
             .choices = standard_mask_names(),
             .help = "Limits of the gain from a published standard, see below.",
             .optional_choice = true},
            {.name = "mask_file",
             .type = ParameterType::mask_file,
             .help = "Limits of the gain from a CSV file with the columns from_hz,to_hz,min_db,max_db."},
            {.name = "mid_hz",
             .unit = "Hz",
             .minimum = 0.0,
             .above_minimum = true,
             .help = "Middle of the band of an octave or third-octave mask."},
            {.name = "reference_hz",
             .unit = "Hz",
             .minimum = 0.0,
             .above_minimum = true,
             .help = "Where a weighting has the gain reference_db; 1000 Hz for A and C."},
            {.name = "reference_db",
             .unit = "dB",
             .minimum = -200.0,
             .maximum = 200.0,
             .help = "Gain that is right at reference_hz, or in the middle of a band filter; 0 dB unless said."},
            {.name = "tolerance_db",
             .unit = "dB",
             .minimum = 0.0,
             .maximum = 100.0,
             .above_minimum = true,
             .help = "How far off the gain may be, for mask = \"k-weighting\"."},
        }};
    for (Parameter& parameter : phase_parameters()) recipe.parameters.push_back(std::move(parameter));
    return recipe;
}

Outcome<ResponseBand> make_band(const std::vector<double>& row, double nyquist_hz) {
    if (row.size() != 4)
        return refused_word("bands", "a band has four numbers", "give from_hz, to_hz and min_db or max_db");
    ResponseBand band{row[0], row[1], std::nullopt, std::nullopt};
    const std::string name = number_text(band.from_hz) + " to " + number_text(band.to_hz) + " Hz";
    if (!(band.from_hz >= 0.0) || !(band.to_hz >= band.from_hz)) {
        return refused_word("bands", "the band " + name + " runs backwards",
                            "from_hz must be at least 0 and at most to_hz");
    }
    if (!(band.to_hz <= nyquist_hz)) {
        return refused_word("bands", "the band " + name + " ends above Nyquist (" + number_text(nyquist_hz) + " Hz)",
                            "end it at " + number_text(nyquist_hz) + " Hz or below");
    }
    if (std::isfinite(row[2])) band.min_db = row[2];
    if (std::isfinite(row[3])) band.max_db = row[3];
    if (!band.min_db && !band.max_db)
        return refused_word("bands", "the band " + name + " has no limit", "give min_db, max_db or both");
    if (band.min_db && band.max_db && !(*band.min_db <= *band.max_db)) {
        return refused_word("bands",
                            "the limits of the band " + name + " cross: min_db " + number_text(*band.min_db) +
                                " is above max_db " + number_text(*band.max_db),
                            "exchange them");
    }
    return band;
}

/// The rows of a file touch, and each is flat; they were checked when it was read.
ResponseMask mask_of_file(const SignalFile& file) {
    ResponseMask mask;
    mask.name = file.path;
    for (std::size_t row = 0; row < file.columns[0].size(); ++row) {
        const MaskLimits limits{file.columns[2][row], file.columns[3][row]};
        mask.corners.push_back({file.columns[0][row], limits});
        mask.corners.push_back({file.columns[1][row], limits});
    }
    return mask;
}

constexpr std::string_view words_of_standards[] = {"mid_hz", "reference_hz", "reference_db", "tolerance_db"};

/// None where the plan names no mask.
Outcome<std::optional<ResponseMask>> make_mask(const ParameterValues& values, const ResponseRule& rule,
                                               double nyquist_hz) {
    const Recipe& recipe = response_recipe();
    const bool has_name = values.has("mask"), has_file = values.has("mask_file");
    if (has_name && has_file)
        return refused_word("mask_file", "a rule holds one mask, from a standard or from a file",
                            "write a second response rule for the other one");
    if (!has_name) {
        for (const std::string_view word : words_of_standards) {
            if (!values.has(word)) continue;
            return refused_word(std::string(word), std::string(word) + " belongs to the mask of a standard",
                                "give mask = \"...\", or leave it out");
        }
    }
    if (has_file) return std::optional(mask_of_file(*values.signal_file("mask_file")));
    if (!has_name) return std::optional<ResponseMask>();
    if (rule.relative_to_design) {
        return refused_word("relative_to", "the mask of a standard holds for the gain itself",
                            "leave relative_to out; reference_db says the gain that is right");
    }
    auto mask = standard_mask(*values.text(recipe, "mask"),
                              {values.number(recipe, "mid_hz"), values.number(recipe, "tolerance_db"),
                               values.number(recipe, "reference_hz"), values.number(recipe, "reference_db")});
    if (!mask) return mask.error();
    const auto mid_hz = values.number(recipe, "mid_hz");
    if (const double from_hz = mid_hz.value_or(mask->from_hz()); !(from_hz < nyquist_hz)) {
        return refused_word(mid_hz ? "mid_hz" : "mask",
                            "the mask begins at " + number_text(from_hz) + " Hz, and Nyquist is " +
                                number_text(nyquist_hz) + " Hz: nothing of it is left",
                            "correct the frequency, or rate_hz");
    }
    return std::optional(*std::move(mask));
}

}  // namespace

const Recipe& response_recipe() {
    static const Recipe recipe = recipe_with_phase();
    return recipe;
}

Outcome<ResponseRule> make_response_rule(const ParameterValues& values, const RuleContext& context) {
    ResponseRule rule;
    rule.relative_to_design = values.text(response_recipe(), "relative_to") == "design";
    rule.delta_db = *values.number(response_recipe(), "delta_db");
    const double nyquist_hz = context.rate_hz / 2.0;
    for (const auto& row : values.rows("bands")) {
        auto band = make_band(row, nyquist_hz);
        if (!band) return band.error();
        rule.bands.push_back(*band);
    }
    auto mask = make_mask(values, rule, nyquist_hz);
    if (!mask) return mask.error();
    rule.mask = *std::move(mask);
    auto phase = make_phase_limits(response_recipe(), values, nyquist_hz);
    if (!phase) return phase.error();
    rule.phase = *std::move(phase);
    if (rule.bands.empty() && !rule.mask && !rule.phase.any()) {
        return refused_word("bands", "a response rule without limits judges nothing",
                            "give bands, a mask, max_phase_deg or max_group_delay_samples");
    }
    return rule;
}

}  // namespace halflsb
