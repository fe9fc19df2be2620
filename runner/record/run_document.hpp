// How run.json is put together from parts that were rendered before. Inside runner/record only.
#pragma once

#include <cstddef>
#include <string>
#include <string_view>
#include <vector>

#include "runner/record/json_parts.hpp"

namespace halflsb {

/// Level of a case of the document, for json_value_text().
inline constexpr std::size_t run_case_level = 2;

/// `document` ends in an empty array and `closing`; puts rendered elements of `level` into the array.
void fill_last_array(std::string& document, std::string_view closing, const std::vector<std::string>& elements,
                     std::size_t level);

/// The document: the keys of `head`, then "verdict" and "cases". Both long parts are put in as text: nothing of a
/// finished case is rendered twice, and a verdict has the same bytes wherever it came from.
std::string joined_document(const Json& head, const std::string& verdict, const std::vector<std::string>& cases);

}  // namespace halflsb
