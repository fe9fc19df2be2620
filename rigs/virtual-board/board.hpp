// The kit with this board's filters: what a firmware is between its interrupt and its main loop.
#pragma once

#include <cstdint>
#include <memory>
#include <vector>

#include "rigs/virtual-board/filter_set.hpp"
#include "rigs/virtual-board/options.hpp"

namespace halflsb::board {

/// Only one can exist: the kit has one instance.
class Board {
public:
    /// `chosen`: 1 to most_filters filters.
    Board(const Options& options, std::vector<FilterParts> chosen, AverageSetting& average, const Faults& faults);
    ~Board();
    Board(const Board&) = delete;
    Board& operator=(const Board&) = delete;

    /// Power-up.
    void start();
    void receive(const std::uint8_t* bytes, std::size_t count);
    /// Handles one frame; false when there is none.
    bool poll();
    /// What the kit has written since it was last emptied.
    std::vector<std::uint8_t>& written();

    /// Since the program began.
    std::uint64_t blocks() const;
    std::uint64_t samples() const;
    /// Counts up at each reset of a filter; the filter that was reset last.
    std::uint64_t resets() const;
    const std::string& running_filter() const;
};

inline constexpr std::size_t most_filters = 32;

}  // namespace halflsb::board
