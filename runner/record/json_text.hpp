// JSON as text with the shortest number that reads back as the same double. (The library's own
// writer gives up to 17 digits for one number in some hundred, 0.544099104 among them.)
#pragma once

#include <cstddef>
#include <nlohmann/json_fwd.hpp>
#include <string>

namespace halflsb {

/// Two blanks a level, arrays of plain values on one line, a line break at the end. NaN and infinity
/// become null; bytes that are no UTF-8 become U+FFFD. No locale.
std::string json_text(const nlohmann::ordered_json& document);

/// A value as it stands inside a document, `level` levels deep: no line break at the end.
std::string json_value_text(const nlohmann::ordered_json& value, std::size_t level);

}  // namespace halflsb
