// What must be said before a stimulus moves anything, and what a passing report is not. The words
// stand here once; help, the report and the first use of a rig show them.
#pragma once

#include <string_view>
#include <vector>

namespace halflsb {

/// One sentence each, without a line break.
const std::vector<std::string_view>& cautions();

/// The one line that ends every report.
std::string_view evidence_caution();

}  // namespace halflsb
