// Numbers in messages and files.
#pragma once

#include <string>

namespace halflsb {

/// The shortest decimal text that reads back as the same number, whatever the locale; a whole number
/// below 2^53 without an exponent.
std::string number_text(double value);

}  // namespace halflsb
