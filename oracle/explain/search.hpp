// The search for boards that return what was captured: first those one change away from the declared one, then two.
//
// The twins decide, bit for bit. Hypotheses that reproduce all captures are grouped: those that no probe separates are
// equivalent, the cheapest speaks for its group. What nothing reproduces is unknown; the nearest is named with how far
// it got, never as the cause.
#pragma once

#include <cstdint>
#include <functional>
#include <optional>
#include <string>
#include <vector>

#include "oracle/explain/capture_fit.hpp"

namespace halflsb {

/// Hypotheses that no probe tells apart.
struct EquivalenceClass {
    std::vector<Candidate> members;  ///< cheapest first
    std::string separated_by;        ///< the probe that separates it from the class before; "" of the first
};

struct SearchResult {
    Candidate declared;
    std::vector<EquivalenceClass> classes;  ///< of what reproduces all captures, the one with the cheapest member first
    std::optional<Candidate> nearest;       ///< of what does not, the one that goes furthest
    std::int64_t tried = 0;                 ///< hypotheses
    bool was_cut = false;                   ///< go_on ended it
    bool has_twin = true;                   ///< the declared arithmetic has one
};

/// `go_on` is asked between hypotheses; false ends the search with what is found so far. Every hypothesis of one change
/// is tried, and those of two where none of one fits.
SearchResult search(const Hypothesis& declared, CaptureSet& captures, const std::function<bool()>& go_on);

}  // namespace halflsb
