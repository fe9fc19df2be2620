// The arithmetic of a board that nobody declared, from what it returned.
//
// Words that the plan leaves open are said one after the other, each so that the response comes nearest; several
// descriptions are kept on the way. The twins decide, bit for bit. What fits is then made as short as it goes.
#pragma once

#include <cstdint>
#include <functional>
#include <optional>
#include <vector>

#include "oracle/explain/capture_fit.hpp"

namespace halflsb {

struct Inference {
    /// What reproduces all captures, without a change and as short as it goes.
    std::optional<Candidate> fitting;
    std::vector<Candidate> nearest;  ///< where nothing does: the nearest first, a few
    std::int64_t tried = 0;
    bool was_cut = false;  ///< go_on ended it
};

/// `plan` is the board as the plan has it, with words left open.
Inference infer_arithmetic(const BoardDescription& plan, CaptureSet& captures, const std::function<bool()>& go_on);

}  // namespace halflsb
