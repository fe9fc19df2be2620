// The response that a companion is held against. The judge reads no file: whoever has the capture fills codes from it.
#pragma once

#include <cstdint>
#include <functional>
#include <span>
#include <string>

#include "stimuli/outcome.hpp"
#include "stimuli/sample_format.hpp"

namespace halflsb {

/// Reads response codes again, from instant `first_index` on, all channels; the capture has them all.
using ResponseReplay = std::function<Outcome<void>(std::int64_t first_index, std::span<Code> codes)>;

struct BaseResponse {
    std::int64_t samples = 0;        ///< instants that came back
    std::int64_t block_samples = 0;  ///< most that were sent together; 0: not known
    ResponseReplay read;
    std::string missing;  ///< why nothing can be held against it; "": `read` holds
};

}  // namespace halflsb
