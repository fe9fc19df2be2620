// What every measure returns: a value and how sure it is.
#pragma once

namespace halflsb {

/// A figure with its standard uncertainty, in the figure's unit.
struct Figure {
    double value = 0.0;
    double standard_uncertainty = 0.0;
    /// How far it may lie off beside that, the same way each time: what codes that were rounded leave open. A bound, so
    /// no quantile widens it.
    double bound = 0.0;
};

}  // namespace halflsb
