#include "runner/config/repository.hpp"

#include "runner/config/document.hpp"
#include "runner/world/printable.hpp"

namespace halflsb {

std::string repository_of(const std::string& path, const Files& files) {
    std::string folder = folder_of(files.resolved(path));
    if (folder == ".") return {};
    for (;;) {
        // A worktree and a submodule have a file of that name, not a folder.
        if (files.exists(folder == "/" ? "/.git" : folder + "/.git")) return folder;
        if (folder == "/") return {};
        folder = folder_of(folder);
    }
}

std::optional<std::string> rig_in_repository_warning(const std::string& rig, const std::string& plan,
                                                     const Files& files) {
    const std::string repository = repository_of(rig, files);
    if (repository.empty() || repository != repository_of(plan, files)) return std::nullopt;
    return "warning: the rig " + printable(rig) + " lies in the plan's repository " + printable(repository) +
           ": who changes the plan there can change the commands that run here\n"
           "  keep rig files in a folder of the lab, outside the firmware's repository";
}

}  // namespace halflsb
