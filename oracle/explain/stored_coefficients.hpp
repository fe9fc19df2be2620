// How finely a firmware may store the coefficients of a design.
#pragma once

#include <vector>

#include "oracle/filters/design.hpp"

namespace halflsb {

struct StoredCoefficients {
    int fraction_bits = 0;
    double price_bits = 0.0;
};

/// From 4 to 32 fraction bits; cheapest are those that fill words of 16 or 32 bits with the largest coefficient.
std::vector<StoredCoefficients> ways_to_store(const FilterDesign& design);

}  // namespace halflsb
