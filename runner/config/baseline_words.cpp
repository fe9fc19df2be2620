#include "runner/config/baseline_words.hpp"

#include "stimuli/format_names.hpp"

namespace halflsb {

namespace {

Parameter text(std::string_view name, double most_characters, std::string_view help) {
    return {.name = name,
            .type = ParameterType::text,
            .unit = "characters",
            .maximum = most_characters,
            .required = true,
            .help = help};
}

Parameter count(std::string_view name, double least, std::string_view help) {
    return {.name = name,
            .type = ParameterType::integer,
            .unit = "samples",
            .minimum = least,
            .maximum = 1e10,
            .required = true,
            .help = help};
}

constexpr double hash_characters = 64;
/// A case made by [case.each] has its values in the name.
constexpr double longest_name_characters = 4000;

}  // namespace

const Recipe& baseline_recipe() {
    static const Recipe recipe{"baseline",
                               "What an accepted run returned.",
                               {
                                   text("title", longest_name_characters, "Of the plan that was run."),
                                   text("accepted_utc", 40, "When it was accepted."),
                                   {.name = "output",
                                    .type = ParameterType::choice,
                                    .required = true,
                                    .choices = format_names(),
                                    .help = "Format of the samples that were returned."},
                                   {.name = "channels",
                                    .type = ParameterType::integer,
                                    .minimum = 1,
                                    .maximum = 16,
                                    .required = true,
                                    .help = "Channels of the signal."},
                               }};
    return recipe;
}

const Recipe& baseline_case_recipe() {
    static const Recipe recipe{"case",
                               "One case of it.",
                               {
                                   text("name", longest_name_characters, "Of the case."),
                                   count("samples", 1, "Samples that were sent, on each channel."),
                                   text("stimulus_sha256", hash_characters, "SHA-256 of the codes that were sent."),
                                   text("response_sha256", hash_characters, "SHA-256 of the codes that came back."),
                                   text("kept", 255, "File of the first codes that came back, beside baseline.toml."),
                                   count("kept_samples", 0, "How many stand in it, on each channel."),
                                   count("block_samples", 0, "Samples in each hashed stretch; 0 when all are kept."),
                               }};
    return recipe;
}

}  // namespace halflsb
