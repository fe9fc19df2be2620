// What the TOML library says about a syntax error, turned into what to do about it. TOML's traps get a
// message of their own: a line break in an inline table, a second [case.stimulus] because a [[case]] was
// forgotten, a repeated key.
#pragma once

#include <string>
#include <string_view>

#include "runner/config/source_text.hpp"

namespace halflsb {

/// `description` is the library's: "Error while parsing CONTEXT: DETAIL". Unknown ones are passed on.
std::string syntax_message(const SourceText& source, Place place, std::string_view description);

}  // namespace halflsb
