// Numbers in a text file, as design programs and spreadsheets write them.
//
// One number a line; or several a line, between commas, semicolons, tabs or blanks (what the first line uses), the same
// count on every line. A comma at the end of a line is forgiven, and where every line but the last ends in one the
// numbers are one long list. A first line of words names the columns. Blank lines and what follows a # are skipped.
#pragma once

#include <string_view>

#include "oracle/filters/coefficient_table.hpp"

namespace halflsb {

/// `text` is UTF-8. `column` names the only column to be taken; "" takes them all.
ReadTable read_text_table(std::string_view text, std::string_view column = {});

}  // namespace halflsb
