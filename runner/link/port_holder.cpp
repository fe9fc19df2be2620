#include "runner/link/port_holder.hpp"

#include <dirent.h>
#include <sys/stat.h>
#include <unistd.h>

#include <algorithm>
#include <charconv>
#include <fstream>
#include <memory>
#include <string_view>
#include <vector>

namespace halflsb {
namespace {

struct CloseFolder {
    void operator()(DIR* folder) const { closedir(folder); }
};

/// The entries of a folder of /proc that are numbers, ascending; empty when it cannot be read.
std::vector<int> numbers_in(const std::string& path) {
    std::vector<int> numbers;
    const std::unique_ptr<DIR, CloseFolder> folder(opendir(path.c_str()));
    if (!folder) return numbers;
    while (const dirent* entry = readdir(folder.get())) {
        const std::string_view name = entry->d_name;
        int number = 0;
        const auto [end, status] = std::from_chars(name.data(), name.data() + name.size(), number);
        if (status == std::errc{} && end == name.data() + name.size()) numbers.push_back(number);
    }
    std::sort(numbers.begin(), numbers.end());
    return numbers;
}

std::string name_of_process(int process) {
    std::ifstream file("/proc/" + std::to_string(process) + "/comm");
    std::string name;
    std::getline(file, name);
    return name;
}

}  // namespace

std::string holder_of(dev_t device, int own_descriptor) {
    const int self = getpid();
    for (const int process : numbers_in("/proc")) {
        const std::string folder = "/proc/" + std::to_string(process) + "/fd";
        for (const int descriptor : numbers_in(folder)) {
            if (process == self && descriptor == own_descriptor) continue;
            struct stat status {};
            if (stat((folder + "/" + std::to_string(descriptor)).c_str(), &status) != 0) continue;
            if (!S_ISCHR(status.st_mode) || status.st_rdev != device) continue;
            const std::string name = name_of_process(process);
            const std::string number = "process " + std::to_string(process);
            return name.empty() ? number : name + " (" + number + ")";
        }
    }
    return "";
}

}  // namespace halflsb
