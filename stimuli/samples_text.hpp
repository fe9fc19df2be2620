// Counts of samples in messages.
#pragma once

#include <cstdint>
#include <string>

namespace halflsb {

/// "1 sample", "300 samples"
inline std::string samples_text(std::int64_t count) {
    return std::to_string(count) + (count == 1 ? " sample" : " samples");
}

}  // namespace halflsb
