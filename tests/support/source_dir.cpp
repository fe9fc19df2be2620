#include "tests/support/source_dir.hpp"

namespace halflsb::test {

std::string source_path(const std::string& from_root) { return HALFLSB_SOURCE_DIR "/" + from_root; }

}  // namespace halflsb::test
