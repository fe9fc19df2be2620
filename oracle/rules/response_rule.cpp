#include "oracle/rules/response_rule.hpp"

#include <cmath>
#include <string>

#include "stimuli/number_text.hpp"

namespace halflsb {

const Recipe& response_recipe() {
    static const Recipe recipe{
        "response",
        "Gain against limits in bands, from a noise, chirp, sine or multitone stimulus, judged against the design.",
        {
            {.name = "bands",
             .type = ParameterType::bands,
             .required = true,
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
        }};
    return recipe;
}

Outcome<ResponseRule> make_response_rule(const ParameterValues& values, const RuleContext& context) {
    ResponseRule rule;
    rule.relative_to_design = values.text(response_recipe(), "relative_to") == "design";
    rule.delta_db = *values.number(response_recipe(), "delta_db");
    const double nyquist_hz = context.rate_hz / 2.0;
    for (const auto& row : values.rows("bands")) {
        if (row.size() != 4)
            return refused_word("bands", "a band has four numbers", "give from_hz, to_hz and min_db or max_db");
        ResponseBand band{row[0], row[1], std::nullopt, std::nullopt};
        const std::string name = number_text(band.from_hz) + " to " + number_text(band.to_hz) + " Hz";
        if (!(band.from_hz >= 0.0) || !(band.to_hz >= band.from_hz)) {
            return refused_word("bands", "the band " + name + " runs backwards",
                                "from_hz must be at least 0 and at most to_hz");
        }
        if (!(band.to_hz <= nyquist_hz)) {
            return refused_word("bands",
                                "the band " + name + " ends above Nyquist (" + number_text(nyquist_hz) + " Hz)",
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
        rule.bands.push_back(band);
    }
    if (rule.bands.empty())
        return refused_word("bands", "a response rule without bands judges nothing", "give at least one band");
    return rule;
}

}  // namespace halflsb
