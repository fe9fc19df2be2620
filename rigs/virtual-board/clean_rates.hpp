// The filters of rigs/filters that change the sample rate: a set of their own, "rates".
#pragma once

#include <vector>

#include "rigs/virtual-board/clean_filters.hpp"

namespace halflsb::board {

std::vector<FilterParts> rate_filters();

}  // namespace halflsb::board
