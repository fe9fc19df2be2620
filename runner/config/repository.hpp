// A rig belongs to the lab, a plan to the firmware's repository: who can change the plan by a pull
// request should not be able to change the rig by the same one.
#pragma once

#include <optional>
#include <string>

#include "runner/world/files.hpp"

namespace halflsb {

/// The folder with a .git that holds the file, links followed; "" when it lies in no repository.
std::string repository_of(const std::string& path, const Files& files);

/// A warning when both lie in one repository.
std::optional<std::string> rig_in_repository_warning(const std::string& rig, const std::string& plan,
                                                     const Files& files);

}  // namespace halflsb
