// The filters of rigs/filters with feedback of the first order or at one delay, as the CW-7 uses them, and filters of
// several channels.
#pragma once

#include <string>
#include <vector>

#include "rigs/virtual-board/clean_filters.hpp"

namespace halflsb::board {

/// y += (x - y) / 16; the state's lower bits floored, or rounded halves upward, where it is cut to a sample.
FilterParts level(std::string name, bool rounds);
/// A DC blocker with its pole at 1 - 2^-8: 0.75 Hz at 1200 samples a second.
FilterParts drain(std::string name);
/// y[n] = 1/2 x[n] + 1/4 x[n-24] + 1/4 y[n-24]: unity gain at 0 and each multiple of 50 Hz at 1200 samples a second.
/// The three coefficients are table 0.
FilterParts echo_comb(std::string name);

/// Samples of one instant are adjacent; each channel passes a filter of its own. All have one format, and no table.
FilterParts channels_of(std::string name, std::vector<FilterParts> channels, bool alike);

}  // namespace halflsb::board
