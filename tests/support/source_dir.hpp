// Where the files of this repository stand that a test reads: tables of tests/published, pages of docs.
// The folder is compiled into one object alone, so a compiler cache serves trees of other folders with all the rest.
#pragma once

#include <string>

namespace halflsb::test {

// The absolute path of a file given from the root of the sources.
std::string source_path(const std::string& from_root);

}  // namespace halflsb::test
