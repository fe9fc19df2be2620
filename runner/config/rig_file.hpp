// Reads a rig: docs/rig.md is its reference. Strict as the reader of plans is.
#pragma once

#include <string>
#include <variant>

#include "runner/config/problems.hpp"
#include "runner/config/rig.hpp"
#include "runner/world/files.hpp"

namespace halflsb {

/// A rig without `isolated = true` is refused: nothing is streamed into a board that may move something.
std::variant<Rig, ReadProblems> read_rig(const std::string& path, const Files& files);

}  // namespace halflsb
