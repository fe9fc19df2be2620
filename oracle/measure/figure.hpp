// What every measure returns: a value and how sure it is.
#pragma once

namespace halflsb {

/// A figure with its standard uncertainty, in the figure's unit.
struct Figure {
    double value = 0.0;
    double standard_uncertainty = 0.0;
};

}  // namespace halflsb
