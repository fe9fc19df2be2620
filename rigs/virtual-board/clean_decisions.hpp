// The filters of rigs/filters that are one of the others with another decision about arithmetic: what each computes is
// written for a plan in rigs/cw-7/exact. They are a set of their own, "decisions", and not among "all": their only
// faults are those of any filter and of the line.
#pragma once

#include <vector>

#include "rigs/virtual-board/clean_filters.hpp"

namespace halflsb::board {

std::vector<FilterParts> decision_filters();

/// Those of all_filters, then these, then those of clean_rates.hpp.
std::vector<FilterParts> every_filter(const TableFaults& faults, AverageSetting& setting);

}  // namespace halflsb::board
