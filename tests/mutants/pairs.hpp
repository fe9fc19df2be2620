// Pairs of a fault and a filter, and what explain must say of each: written by what the line does, not by what came
// out.
#pragma once

#include <string>
#include <vector>

#include "tests/mutants/faults.hpp"

namespace halflsb::mutants {

struct Mutant {
    std::string id;  ///< of the catalogue of faults
    std::string filter;
    Fault fault = Fault::none;
    /// Words of the change that explain must name, alternatives separated by " | ", two changes of one alternative by
    /// " + ". Empty: no words of explain are for it.
    std::string expected;
};

std::vector<Mutant> every_mutant();

/// The change that is said, "a; b" of two, has the words that are expected.
bool is_expected(const std::string& expected, const std::string& said);

}  // namespace halflsb::mutants
