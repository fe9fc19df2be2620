// The coefficients that a described stage stores.
#pragma once

#include <string>
#include <vector>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

/// As the plan's reader knows it, with the sign in which it is stored.
struct NamedCoefficient {
    std::string name;  ///< "taps[3]", "-a1 of section 2"
    double value = 0.0;
};

/// As designed, before they are rounded; docs/arithmetic.md says which a kind of filter has. Empty where none is.
std::vector<NamedCoefficient> named_coefficients(const DescribedStage& described);

}  // namespace halflsb
