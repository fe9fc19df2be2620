// The known word that somebody probably meant.
#pragma once

#include <string>
#include <string_view>
#include <vector>

namespace halflsb {

/// The known word with the fewest edits (insert, delete, replace, exchange neighbours: Damerau 1964) from
/// `word`; "" when even that one is further away than a third of the longer of the two. Words longer
/// than 64 bytes have no neighbour.
std::string_view nearest_word(std::string_view word, const std::vector<std::string_view>& known);

/// "a", "a or b", "a, b or c"
std::string joined_words(const std::vector<std::string_view>& words, std::string_view last_separator = " or ");

}  // namespace halflsb
