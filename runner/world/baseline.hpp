// What a baseline keeps of one case: runner/record writes it, runner/config reads it back.
#pragma once

#include <cstdint>
#include <string>
#include <vector>

namespace halflsb {

/// Its name in the baseline's folder; written last, so that a baseline is never half a new one.
inline constexpr const char* baseline_file_name = "baseline.toml";

struct BaselineCase {
    std::string name;
    std::int64_t samples = 0;  ///< instants
    std::string stimulus_sha256, response_sha256;
    std::string kept;  ///< file in the baseline's folder
    std::int64_t kept_samples = 0;
    std::int64_t block_samples = 0;  ///< 0: every sample is kept, and no stretch has a hash
    std::vector<std::string> block_sha256;
    bool operator==(const BaselineCase&) const = default;
};

}  // namespace halflsb
