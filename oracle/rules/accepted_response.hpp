// What a baseline kept of one case: the reference of the rule `unchanged`, which needs no oracle.
#pragma once

#include <cstdint>
#include <functional>
#include <memory>
#include <span>
#include <string>
#include <vector>

#include "stimuli/sample_format.hpp"

namespace halflsb {

/// A running hash over codes as an NPY file holds them (stimuli/npy.hpp); the runner brings SHA-256.
class CodeDigest {
public:
    virtual ~CodeDigest() = default;
    virtual void add(const SampleFormat& format, std::span<const Code> codes) = 0;
    /// Of all that was added, in lower-case hex; only once.
    virtual std::string value() = 0;
};

struct AcceptedResponse {
    std::string origin;           ///< for reports: "baseline/cw7, accepted 2026-12-01T09:30:00Z"
    std::string stimulus_sha256;  ///< of the codes that were sent
    std::string response_sha256;  ///< of all codes that came back
    std::int64_t samples = 0;     ///< instants
    std::vector<Code> kept;       ///< the first of them, all channels; fewer than samples * channels in a long case
    /// Of each stretch of block_samples instants, the last one shorter: where a change begins beyond `kept`.
    std::int64_t block_samples = 0;
    std::vector<std::string> block_sha256;
    std::function<std::unique_ptr<CodeDigest>()> make_digest;
};

}  // namespace halflsb
