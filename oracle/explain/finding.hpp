// What explains one channel's captures, from a plan that says all, some or nothing of the arithmetic.
#pragma once

#include <functional>
#include <optional>

#include "oracle/explain/linear_fit.hpp"
#include "oracle/explain/search.hpp"
#include "oracle/explain/symptoms.hpp"

namespace halflsb {

enum class FindingKind {
    as_declared,  ///< the board returns what its plan says, to the bit; words left open are said by the board
    found,        ///< one cause, or several that nothing tells apart with this filter
    several,      ///< causes that the captures do not tell apart, and another stimulus would
    unknown,      ///< nothing that was tried reproduces the captures
    no_twin,      ///< what the plan says has no bits to compare with
};
std::string_view name_of(FindingKind kind);

struct Finding {
    FindingKind kind = FindingKind::unknown;
    /// The plan leaves words open, and `search.declared` says them as the board has them, or as it nearly has.
    bool is_inferred = false;
    SearchResult search;
    std::optional<Symptoms> symptoms;  ///< of unknown and several: how the response differs from `search.declared`
    std::optional<LinearFit> linear;   ///< of unknown: the linear filter that comes nearest, in the plan's order
    std::optional<Error> missing;      ///< of no_twin: what is missing
};

/// `plan` is the board as the plan has it. Where words are left open they are inferred first; where no arithmetic fits,
/// what goes wrong is searched for from the nearest ones.
Finding find_cause(const BoardDescription& plan, CaptureSet& captures, const std::function<bool()>& go_on);

}  // namespace halflsb
