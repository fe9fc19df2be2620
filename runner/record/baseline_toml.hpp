// The text of baseline.toml: what a baseline keeps of an accepted run. runner/config reads it back (baseline_file.hpp).
#pragma once

#include <cstdint>
#include <string>
#include <vector>

namespace halflsb {

/// Its name in the baseline's folder; written last, so that a baseline is never half a new one.
inline constexpr const char* baseline_file_name = "baseline.toml";
/// Instants that are kept of a case unless --samples says otherwise, and stretches that a longer one is hashed in.
inline constexpr std::int64_t usual_kept_samples = 65'536;
inline constexpr std::int64_t most_baseline_blocks = 256;

struct BaselineCase {
    std::string name;
    std::int64_t samples = 0;  ///< instants
    std::string stimulus_sha256, response_sha256;
    std::string kept;  ///< file in the baseline's folder
    std::int64_t kept_samples = 0;
    std::int64_t block_samples = 0;  ///< 0: every sample is kept
    std::vector<std::string> block_sha256;
    bool operator==(const BaselineCase&) const = default;
};

struct BaselineContent {
    std::string title, accepted_utc, tool_version, board_serial, build_id, plan_sha256;
    std::string output;  ///< name of the format
    int channels = 1;
    std::vector<BaselineCase> cases;
};

std::string baseline_toml(const BaselineContent& content);

}  // namespace halflsb
