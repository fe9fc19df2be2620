// The moving averages of rigs/filters, one for each sample format that firmware averages.
#pragma once

#include <string>

#include "rigs/virtual-board/clean_filters.hpp"

namespace halflsb::board {

/// Every format but q31 and f32. Before the start the signal is the zero code.
FilterParts average_of(std::string name, Format format, int points);
/// q15, its window the setting's value, which makes the filter anew when it is changed.
FilterParts adjustable_average(std::string name, AverageSetting& setting);

}  // namespace halflsb::board
