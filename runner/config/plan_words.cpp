#include "runner/config/plan_words.hpp"

#include "oracle/judge/plan.hpp"
#include "stimuli/format_names.hpp"
#include "stimuli/rounding.hpp"

namespace halflsb {

namespace {

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
    static const Certainty usual;
    static const Recipe recipe{
        "plan",
        "At the top of the file, above the first header.",
        {{.name = "title",
          .type = ParameterType::text,
          .unit = "characters",
          .maximum = 200,
          .required = true,
          .help = "What this plan accepts, for the report."},
         {.name = "alpha",
          .minimum = 1e-12,
          .maximum = 0.1,
          .default_value = usual.alpha,
          .help =
              "Chance that a right board fails anywhere in the whole check; shared by all measured figures that are "
              "uncertain."},
         {.name = "beta",
          .minimum = 1e-12,
          .maximum = 0.1,
          .default_value = usual.beta,
          .help = "Chance that a figure which lies beyond its limit, and beyond the rule's zone of indifference, "
                  "passes."},
         {.name = "confidence",
          .minimum = 0.5,
          .maximum = 0.999999,
          .above_minimum = true,
          .default_value = usual.confidence,
          .help = "Of the intervals in reports; no verdict hangs on it."},
         {.name = "stream",
          .type = ParameterType::choice,
          .choices = {"decided", "whole"},
          .help = "Whether a case ends once all of its rules are decided, where they can be before the last sample, or "
                  "every stimulus is streamed to its end."}}};
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
            {.name = "input_justification",
             .type = ParameterType::choice,
             .choices = {"right", "left", "packed"},
             .help = "Where the bits of an input word lie in bytes that have room to spare: u12 in 2, i24 in 4; "
                     "packed is i24 in 3."},
            {.name = "input_byte_order",
             .type = ParameterType::choice,
             .choices = {"little", "big"},
             .help = "Whether the first byte of an input word on the wire is the lowest or the highest."},
            {.name = "output_justification",
             .type = ParameterType::choice,
             .choices = {"right", "left", "packed"},
             .help = "Where the bits of an output word lie in bytes that have room to spare: u12 in 2, i24 in 4; "
                     "packed is i24 in 3."},
            {.name = "output_byte_order",
             .type = ParameterType::choice,
             .choices = {"little", "big"},
             .help = "Whether the first byte of an output word on the wire is the lowest or the highest."},
            {.name = "channels",
             .type = ParameterType::integer,
             .minimum = 1,
             .maximum = 16,
             .default_value = 1,
             .help = "Channels, as many out as in; the samples of one instant are adjacent."},
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
            {.name = "input_unit",
             .type = ParameterType::text,
             .unit = "characters",
             .maximum = 24,
             .help = "Engineering unit of the input; that of the output when left out."},
            {.name = "input_full_scale_unit",
             .type = ParameterType::real,
             .help = "What full scale of the input means in its unit; not 0. Stimuli given in the unit need it. When "
                     "left out full_scale_unit serves, if both sides have one unit, kind of value and full scale."},
            {.name = "output_per_input",
             .type = ParameterType::real,
             .minimum = -1e12,
             .maximum = 1e12,
             .help =
                 "Value out per value in at gain 1; not 0. For input and output of different kinds of value (q; i and "
                 "u; f), and required there."},
            {.name = "quantise",
             .type = ParameterType::choice,
             .choices = roundings_with_default_first(),
             .help = "Rounding of the stimuli to codes of the input format."},
        }};
    return recipe;
}

const Recipe& case_recipe() {
    static const Recipe recipe{
        "case",
        "One stimulus with its rules.",
        {
            {.name = "name",
             .type = ParameterType::text,
             .unit = "characters",
             .maximum = 80,
             .required = true,
             .help = "What --case and the report call it; each case has its own."},
            {.name = "purpose",
             .type = ParameterType::text,
             .unit = "characters",
             .maximum = 200,
             .help = "What this case is there to find, for reports."},
            {.name = "start",
             .type = ParameterType::choice,
             .choices = {name_of(Start::reset), name_of(Start::flush), name_of(Start::running)},
             .help = "State in which the filter starts: reset as after power-up; flushed with zeros until nothing is "
                     "left of what went before; or running, as the case before left it."},
            {.name = "discard_samples",
             .type = ParameterType::integer,
             .unit = "samples",
             .minimum = 1,
             .maximum = 1e10,
             .help = "With start = \"running\", and required there: so many leading samples are judged by no rule."},
            {.name = "rate_hz",
             .type = ParameterType::real,
             .unit = "Hz",
             .minimum = 1e-6,
             .maximum = 1e9,
             .help = "In place of that of [signal], where a setting changes the rate of the filter."},
        }};
    return recipe;
}

const Recipe& case_stimulus_recipe() {
    static const Recipe recipe{
        "stimulus",
        "What is sent. Beside the words of its shape:",
        {{.name = "channel",
          .type = ParameterType::integer,
          .minimum = 1,
          .maximum = 16,
          .help = "The channel that is driven, counted from 1; the others get zeros. When left out all are driven."}}};
    return recipe;
}

}  // namespace halflsb
