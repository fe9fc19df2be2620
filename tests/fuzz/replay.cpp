// Runs a target over files: replay FOLDER-or-FILE ...   Status 2 when there was nothing to run.
#include <algorithm>
#include <cstdio>
#include <exception>
#include <filesystem>
#include <fstream>
#include <iterator>
#include <string>
#include <vector>

#include "tests/fuzz/target.hpp"

namespace {

std::vector<std::filesystem::path> files_of(int count, char** names) {
    std::vector<std::filesystem::path> files;
    for (int i = 1; i < count; ++i) {
        if (!std::filesystem::is_directory(names[i])) {
            files.emplace_back(names[i]);
            continue;
        }
        for (const auto& entry : std::filesystem::directory_iterator(names[i])) files.push_back(entry.path());
    }
    std::sort(files.begin(), files.end());
    return files;
}

int replay(const std::vector<std::filesystem::path>& files) {
    for (const auto& path : files) {
        std::ifstream file(path, std::ios::binary);
        if (!file) {
            std::fprintf(stderr, "%s: cannot be read\n", path.c_str());
            return 2;
        }
        const std::string bytes((std::istreambuf_iterator<char>(file)), std::istreambuf_iterator<char>());
        std::printf("%s\n", path.c_str());
        std::fflush(stdout);  // the name of the culprit must be out before it aborts
        LLVMFuzzerTestOneInput(reinterpret_cast<const std::uint8_t*>(bytes.data()), bytes.size());
    }
    std::printf("%zu inputs\n", files.size());
    return files.empty() ? 2 : 0;
}

}  // namespace

int main(int count, char** names) {
    try {
        return replay(files_of(count, names));
    } catch (const std::exception& error) {
        std::fprintf(stderr, "%s\n", error.what());
        return 2;
    }
}
