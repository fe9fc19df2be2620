// A word of a command as a person pastes it into bash.
#pragma once

#include <string>

namespace halflsb {

/// The word itself where no sign of it means anything to a shell, else in single quotes; with control characters, signs
/// that would not be seen as they are, or bytes that are no UTF-8, in bash's $'...' with "\xff" for each of those.
std::string shell_quoted(const std::string& word);

/// "--case NAME"; a name that looks like an option must not be taken for one.
std::string case_option(const std::string& name);

}  // namespace halflsb
