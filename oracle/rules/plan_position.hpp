// Where in a plan something was asked for.
#pragma once

#include <string>

namespace halflsb {

/// Line and column count from 1.
struct PlanPosition {
    std::string file;
    int line = 0;
    int column = 0;
    bool operator==(const PlanPosition&) const = default;
};

/// "plan.toml:12:3"
std::string to_text(const PlanPosition& position);

}  // namespace halflsb
