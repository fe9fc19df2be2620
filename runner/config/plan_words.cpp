#include "runner/config/plan_words.hpp"

#include "stimuli/rounding.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

namespace {

std::vector<std::string_view> format_names() {
    std::vector<std::string_view> names;
    for (const SampleFormat& format : sample_formats()) names.push_back(format.name);
    return names;
}

/// The roundings with the default in front, where a choice has it.
std::vector<std::string_view> roundings_with_default_first() {
    std::vector<std::string_view> names{name_of(Rounding::half_up)};
    for (const std::string_view name : rounding_names()) {
        if (name != names.front()) names.push_back(name);
    }
    return names;
}

}  // namespace

const Recipe& plan_recipe() {
    static const Recipe recipe{"plan",
                               "At the top of the file, above the first header.",
                               {{.name = "title",
                                 .type = ParameterType::text,
                                 .unit = "characters",
                                 .maximum = 200,
                                 .required = true,
                                 .help = "What this plan accepts, for the report."}}};
    return recipe;
}

const Recipe& signal_recipe() {
    static const Recipe recipe{
        "signal",
        "Facts of the firmware; the board's greeting must agree.",
        {
            {.name = "rate_hz",
             .type = ParameterType::real,
             .unit = "Hz",
             .minimum = 1e-6,
             .maximum = 1e9,
             .required = true,
             .help = "Samples per second of the filter."},
            {.name = "input",
             .type = ParameterType::choice,
             .required = true,
             .choices = format_names(),
             .help = "Format of the samples sent to the board."},
            {.name = "output",
             .type = ParameterType::choice,
             .required = true,
             .choices = format_names(),
             .help = "Format of the samples it returns."},
            {.name = "filter",
             .type = ParameterType::text,
             .unit = "characters",
             .maximum = 24,
             .help = "The board's name for the filter; may be left out when the board has only one."},
            {.name = "unit",
             .type = ParameterType::text,
             .unit = "characters",
             .maximum = 24,
             .help = "Engineering unit of the output, \"g\" for example."},
            {.name = "full_scale_unit",
             .type = ParameterType::real,
             .help = "What full scale of the output means in that unit; not 0. Limits ending in _unit need it."},
            {.name = "output_per_input",
             .type = ParameterType::real,
             .help = "Value out per value in at gain 1; not 0. For input and output of different families (q, i, f), "
                     "and required there."},
            {.name = "quantise",
             .type = ParameterType::choice,
             .choices = roundings_with_default_first(),
             .help = "Rounding of the stimuli to codes of the input format."},
        }};
    return recipe;
}

const Recipe& case_recipe() {
    static const Recipe recipe{"case",
                               "One stimulus with its rules.",
                               {
                                   {.name = "name",
                                    .type = ParameterType::text,
                                    .unit = "characters",
                                    .maximum = 80,
                                    .required = true,
                                    .help = "What --case and the report call it; each case has its own."},
                                   {.name = "start",
                                    .type = ParameterType::choice,
                                    .choices = {"reset"},
                                    .help = "State in which the filter starts."},
                               }};
    return recipe;
}

}  // namespace halflsb
