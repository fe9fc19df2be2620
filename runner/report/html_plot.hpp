// A plot of a case as a figure of the report: its numbers as data, which the script of the page draws.
#pragma once

#include <string>

#include "oracle/judge/plots.hpp"

namespace halflsb {

/// The element "figure" with caption, note and data. `number` tells the plots of a page apart, from 1.
std::string plot_figure(const Plot& plot, std::size_t number);

}  // namespace halflsb
