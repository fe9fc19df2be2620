// The text of baseline.toml: what a baseline keeps of an accepted run. runner/config reads it back (baseline_file.hpp).
#pragma once

#include <cstdint>
#include <string>
#include <vector>

#include "runner/world/baseline.hpp"

namespace halflsb {

/// Instants that are kept of a case unless --samples says otherwise, and stretches that a longer one is hashed in.
inline constexpr std::int64_t usual_kept_samples = 65'536;
inline constexpr std::int64_t most_baseline_blocks = 256;

struct BaselineContent {
    std::string title, accepted_utc, tool_version, board_serial, build_id, plan_sha256;
    std::string output;  ///< name of the format
    int channels = 1;
    std::vector<BaselineCase> cases;
};

std::string baseline_toml(const BaselineContent& content);

}  // namespace halflsb
