// A board whose coefficients are those that its captures show, whatever they are.
#pragma once

#include <vector>

#include "oracle/explain/capture_fit.hpp"
#include "oracle/explain/hypothesis.hpp"

namespace halflsb {

/// Of a board of one FIR, one section or one recursion with a word for its coefficients: the least squares fit
/// (linear_fit.hpp) on the grid of that word. Where a coefficient falls near the middle of two steps both are tried, of
/// at most five; none where the captures do not tell them so finely.
std::vector<Hypothesis> identified_changes(const Hypothesis& from, const CaptureSet& captures);

}  // namespace halflsb
