// Help and the reference in docs, made from the tables of options.hpp.
#pragma once

#include <string>

namespace halflsb {

/// All of it, at most 80 columns wide.
std::string full_help();

/// The forms of the command and one example.
std::string short_usage();

/// The generated part of docs/command.md.
std::string command_reference();

}  // namespace halflsb
