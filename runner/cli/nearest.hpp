// "Did you mean ...?": the known word nearest to one that is not known.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

namespace halflsb {

/// Insertions, deletions, substitutions and swaps of neighbours that turn one word into the other
/// (optimal string alignment, Damerau 1964). Time is the product of the lengths.
std::size_t edit_distance(std::string_view a, std::string_view b);

/// The first of the words at the smallest distance, if that is at most a third of the longer word's
/// length, and at least 1 is allowed.
std::optional<std::string> nearest_of(std::string_view word, const std::vector<std::string>& known);

}  // namespace halflsb
