// The command line of virtual-board.
#pragma once

#include <cstdint>
#include <optional>
#include <string>
#include <vector>

namespace halflsb::board {

struct Options {
    std::string link, filter_set = "all", serial = "VB-0001", stats_file;
    std::optional<std::vector<std::uint8_t>> build_id;  ///< nullopt: the program's own
    std::vector<std::string> faults;
    std::uint32_t baud = 0;           ///< 0: unpaced
    std::uint16_t block_samples = 0;  ///< 0: as compiled
    std::uint8_t credit_blocks = 0;
    int ready_descriptor = -1;
    bool dies_with_parent = false, list_filters = false, list_faults = false, help = false;
};

/// "" or what is wrong with the command line.
std::string read_options(const std::vector<std::string>& arguments, Options& options);
std::string usage();

}  // namespace halflsb::board
