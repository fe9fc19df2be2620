// Which cases --case and --label select.
#pragma once

#include <string>
#include <string_view>
#include <vector>

#include "stimuli/outcome.hpp"

namespace halflsb {

/// Whether `name` is matched by `pattern`, where "*" stands for any number of characters and "?" for
/// one (a code point of valid UTF-8). Time is at worst the product of the lengths.
bool matches_glob(std::string_view pattern, std::string_view name);

/// Indices into `names` of the selected cases, ascending, each once; all of them without a pattern. A
/// pattern that is exactly a case's name selects that case alone, even with "*" in it. A pattern that
/// matches nothing is an error of kind usage that lists the names.
Outcome<std::vector<std::size_t>> select_cases(const std::vector<std::string>& names,
                                               const std::vector<std::string>& patterns);

/// Of the cases `selected` those that have one of the labels; all of them when none is asked for. `labels_of` has the
/// labels of every case. A label that no case has, and labels that leave nothing, are errors of kind usage that list
/// the labels there are.
Outcome<std::vector<std::size_t>> select_labelled(const std::vector<std::size_t>& selected,
                                                  const std::vector<std::vector<std::string>>& labels_of,
                                                  const std::vector<std::string>& asked);

}  // namespace halflsb
