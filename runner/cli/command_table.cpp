// Every command with its words.
#include "runner/cli/options.hpp"

namespace halflsb {

const std::vector<CommandSpec>& command_table() {
    static const std::vector<CommandSpec> table = {
        {Command::check, "check", "PLAN", "", "",
         "Streams the plan's stimuli to the board, captures what its filter returns and judges it; the main job",
         "halflsb check cw7.toml --rig bench.toml"},
        {Command::judge, "judge", "RUN", "PLAN", "",
         "Judges the captures of a run again, by the plan it was made with or by another; needs no board and, but "
         "for --html, writes nothing",
         "halflsb judge .halflsb/20261201T093000Z-cw7"},
        {Command::explain, "explain", "RUN", "", "",
         "Searches for what the board does otherwise than its plan says, until every sample of a run is reproduced; of "
         "a good run whose plan leaves it open, the arithmetic; needs no board, but with --rig it asks one what tells "
         "the "
         "causes apart, and records that beside the run",
         "halflsb explain .halflsb/20261201T093000Z-cw7 --rig bench.toml"},
        {Command::compare, "compare", "RUN", "", "RUN",
         "Holds the captures of a second run against those of the first, which is the older one: where they differ "
         "first, by how much, and what the board does otherwise since; needs no board and writes nothing",
         "halflsb compare .halflsb/20261201T093000Z-cw7 .halflsb/20261203T101500Z-cw7"},
        {Command::accept, "accept", "RUN", "", "",
         "Keeps the responses of a good run as the baseline that its plan's unchanged rules compare with",
         "halflsb accept .halflsb/20261201T093000Z-cw7"},
        {Command::predict, "predict", "PLAN", "", "",
         "Reads the files and tells on paper what to expect: response, error bounds, headroom, what the rules would "
         "see, "
         "the time on the wire; needs no board",
         "halflsb predict cw7.toml --rig bench.toml"},
        {Command::ports, "ports", "", "", "", "Lists the serial ports with their stable names", "halflsb ports"},
    };
    return table;
}

}  // namespace halflsb
