// Text and numbers as a page of HTML may hold them. Whatever a plan, a board or a file says goes through here.
#pragma once

#include <string>
#include <string_view>

namespace halflsb {

/// Text between tags or in a quoted attribute: printable (runner/world/printable.hpp; line breaks stay), and the signs
/// of HTML as references.
std::string html_text(std::string_view text);

/// "<NAME class=\"WORDS\">TEXT</NAME>", the text escaped; without the attribute where `words` is "". Name and words are
/// our own.
std::string html_element(std::string_view name, std::string_view words, std::string_view text);

/// A string of JSON within a script element: "<", ">" and "&" and all that is not plain ASCII stand as \uXXXX, so that
/// no text can end the element or a line of it.
std::string script_string(std::string_view text);

/// A number of JSON with at most `digits` significant ones, all of a whole number below 2^53; null for what is not
/// finite.
std::string script_number(double value, int digits);

/// The shortest text that reads back as the same number; "" for what is not finite.
std::string number_attribute(double value);

}  // namespace halflsb
