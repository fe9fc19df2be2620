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

/// What content_sha256 holds while the hash over the document is taken.
inline constexpr std::string_view unsealed_sha256 = "0000000000000000000000000000000000000000000000000000000000000000";

/// The document with its content_sha256 filled in: the SHA-256 of the text in which that key holds unsealed_sha256. So
/// an edit by hand shows. Without the key, or with null in it (a run that is not finished), the document as it is.
std::string sealed(std::string document);
/// Whether content_sha256 is that of the document.
bool is_sealed(const std::string& document);

/// The document: the keys of `head`, then "verdict" and "cases". Both long parts are put in as text: nothing of a
/// finished case is rendered twice, and a verdict has the same bytes wherever it came from. Sealed.
std::string joined_document(const Json& head, const std::string& verdict, const std::vector<std::string>& cases);

}  // namespace halflsb
