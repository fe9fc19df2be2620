// What cannot be of a stage's arithmetic once everything is said. Private to this room.
#pragma once

#include <optional>

#include "oracle/arithmetic/described.hpp"

namespace halflsb {

/// An Error's place is the word of the arithmetic to blame.
std::optional<Error> contradiction_in(const DescribedStage& stage);

}  // namespace halflsb
