// What tables of section coefficients turn into: signs, order, division by a0, the cut-off for another rate.
#pragma once

#include <optional>
#include <string>
#include <vector>

#include "oracle/filters/design.hpp"

namespace halflsb {

struct NamedSection {
    std::string what;
    double price_bits = 0.0;
    BiquadSection section;
};

/// Others that the section may have been made. `stored_bits`: the fraction bits in which its coefficients are stored,
/// half away from zero; none: as they are.
std::vector<NamedSection> section_changes(const BiquadSection& section, std::optional<int> stored_bits);

}  // namespace halflsb
