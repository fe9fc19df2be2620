// Masks of published standards by their names in a plan.
#pragma once

#include <optional>
#include <string>
#include <string_view>
#include <vector>

#include "oracle/rules/response_mask.hpp"
#include "stimuli/outcome.hpp"

namespace halflsb {

/// "a-weighting class 1" and so on, in the order that docs show them.
const std::vector<std::string_view>& standard_mask_names();

/// What a plan says beside the name.
struct StandardMaskWords {
    std::optional<double> mid_hz;        ///< of a band filter
    std::optional<double> tolerance_db;  ///< of a weighting whose standard gives no limits
    std::optional<double> reference_hz;  ///< where a weighting has reference_db
    std::optional<double> reference_db;  ///< there, or in the middle of a band filter; 0 unless said
};

/// An Error's place is the word to blame. `name` is one of the above.
Outcome<ResponseMask> standard_mask(std::string_view name, const StandardMaskWords& words);

}  // namespace halflsb
