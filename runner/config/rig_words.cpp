#include "runner/config/rig_words.hpp"

namespace halflsb {

const Recipe& board_recipe() {
    static const Recipe recipe{"board",
                               "Which board this is.",
                               {{.name = "name",
                                 .type = ParameterType::text,
                                 .unit = "characters",
                                 .maximum = 80,
                                 .required = true,
                                 .help = "What the report calls it."}}};
    return recipe;
}

const Recipe& link_recipe() {
    static const Recipe recipe{
        "link",
        "How bytes reach it.",
        {
            {.name = "use",
             .type = ParameterType::choice,
             .required = true,
             .choices = {"serial"},
             .help = "The kind of link."},
            {.name = "port",
             .type = ParameterType::text,
             .unit = "characters",
             .maximum = 4000,
             .required = true,
             .help = "A stable name as `halflsb ports` lists them (usb:VID:PID or usb:VID:PID:SERIAL), or the path of "
                     "a device; one that starts with ./ is taken from the rig's folder."},
            {.name = "baud",
             .type = ParameterType::integer,
             .unit = "baud",
             .minimum = 300,
             .maximum = 12e6,
             .default_value = 921600,
             .help = "Line rate; 8 data bits, no parity, 1 stop bit."},
        }};
    return recipe;
}

const Recipe& wire_recipe() {
    static const Recipe recipe{"wire",
                               "How samples travel in the bytes.",
                               {
                                   {.name = "form",
                                    .type = ParameterType::choice,
                                    .required = true,
                                    .choices = {"framed"},
                                    .help = "The form of the wire; docs/wire.md describes it."},
                                   {.name = "block_samples",
                                    .type = ParameterType::integer,
                                    .unit = "samples",
                                    .minimum = 1,
                                    .maximum = 4096,
                                    .default_value = 256,
                                    .help = "Samples in a block, at most; less when the board holds less."},
                                   {.name = "answer_s",
                                    .type = ParameterType::real,
                                    .unit = "s",
                                    .minimum = 0.01,
                                    .maximum = 3600,
                                    .default_value = 2,
                                    .help = "The longest silence of the board while answers are due."},
                                   {.name = "greet_s",
                                    .type = ParameterType::real,
                                    .unit = "s",
                                    .minimum = 0.01,
                                    .maximum = 3600,
                                    .default_value = 5,
                                    .help = "The longest wait for the board's whole greeting."},
                               }};
    return recipe;
}

const Recipe& run_recipe() {
    static const Recipe recipe{
        "run",
        "How the bench treats a case.",
        {{.name = "attempts",
          .type = ParameterType::integer,
          .minimum = 1,
          .maximum = 10,
          .default_value = 1,
          .help = "How often a case may be run until its capture is valid; one that failed or is undecided never runs "
                  "again."}}};
    return recipe;
}

const Recipe& commands_recipe() {
    static const Recipe recipe{"commands",
                               "What may run on this machine; only a rig can say so.",
                               {{.name = "before_run_limit_s",
                                 .type = ParameterType::real,
                                 .unit = "s",
                                 .minimum = 0.1,
                                 .maximum = 86400,
                                 .default_value = 120,
                                 .help = "The longest that each of the commands may take; then it is stopped."}}};
    return recipe;
}

}  // namespace halflsb
